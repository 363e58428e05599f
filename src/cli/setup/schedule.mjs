/**
 * A piece of work with what it waits for.
 *
 * @template Result
 * @typedef {object} Task
 * @property {string} name
 * @property {readonly string[]} [after]  names of tasks that must have ended well; those that are not in the list do not count
 * @property {boolean} [alone]  runs when nothing else does: its timing would suffer
 * @property {() => Promise<Result>} work
 */

/**
 * Runs tasks side by side, in their order as places come free.
 *
 * @template Result
 * @param {readonly Task<Result>[]} tasks
 * @param {object} options
 * @param {number} options.places  how many at once, ≥ 1
 * @param {(result: Result) => boolean} options.well  whether what waits for a task may run
 * @param {(task: Task<Result>, result: Result) => void} options.onend
 * @returns {Promise<Map<string, Result>>} without the tasks that could not run because one before them failed
 * @throws what a task throws, after those that run have ended; no further one is begun
 */
export async function runTasks(tasks, { places, well, onend }) {
	/** @type {Map<string, Result>} */
	const results = new Map();
	/** @type {Map<string, Promise<void>>} */
	const running = new Map();
	/** @type {Set<string>} */
	const begun = new Set();
	/** @type {unknown[]} */
	const thrown = [];
	const names = new Set(tasks.map((task) => task.name));
	let aloneRuns = false;

	/** @param {Task<Result>} task */
	const mayRun = (task) =>
		!begun.has(task.name) &&
		!(task.alone && running.size > 0) &&
		(task.after ?? []).every((name) => {
			const result = results.get(name);
			return !names.has(name) || (result !== undefined && well(result));
		});

	for (;;) {
		// What runs alone must not wait for ever behind small tasks that could slip in: tasks are taken in their order.
		while (thrown.length === 0 && !aloneRuns && running.size < places) {
			const task = tasks.find(mayRun);
			if (!task) break;
			begun.add(task.name);
			aloneRuns = task.alone === true;
			const ended = task
				.work()
				.then((result) => {
					results.set(task.name, result);
					onend(task, result);
				})
				.catch((error) => void thrown.push(error))
				.finally(() => {
					running.delete(task.name);
					if (task.alone) aloneRuns = false;
				});
			running.set(task.name, ended);
		}
		if (running.size === 0) break;
		await Promise.race(running.values());
	}
	if (thrown.length > 0) throw thrown[0];
	return results;
}
