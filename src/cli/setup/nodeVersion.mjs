// This file and the two entries start.mjs and test.mjs keep to a syntax that Node 12 can parse: a person with an old Node
// must read one sentence, not a SyntaxError. Everything else is imported only after the check.

/** The oldest Node that the pinned packages run on (Vite 8 and SvelteKit 2 need 20.19). */
export const OLDEST_NODE = [20, 19];

/**
 * Says in one sentence why a Node version cannot run Kerbnote.
 *
 * @param {string} version as in `process.versions.node`, e.g. "20.19.0"
 * @returns {string} the sentence, or '' where the version will do
 * @example nodeProblem('22.1.0') // => ''
 */
export function nodeProblem(version) {
	const parts = String(version).split('.').map(Number);
	const newEnough = parts[0] > OLDEST_NODE[0] || (parts[0] === OLDEST_NODE[0] && parts[1] >= OLDEST_NODE[1]);
	return newEnough
		? ''
		: 'Kerbnote needs Node ' +
				OLDEST_NODE.join('.') +
				' or newer, and this is Node ' +
				version +
				'; install a newer one and start again.';
}

/**
 * Ends the process with one sentence and exit code 1 where Node is too old, else loads and runs the command.
 *
 * @param {() => Promise<{ main: (args: string[]) => Promise<number> }>} load imports the module that does the work
 */
export function runOnModernNode(load) {
	const problem = nodeProblem(process.versions.node);
	if (problem) {
		console.error(problem);
		process.exit(1);
	}
	load()
		.then(function (command) {
			return command.main(process.argv.slice(2));
		})
		.then(
			function (exitCode) {
				process.exit(exitCode);
			},
			function (error) {
				console.error(error);
				process.exit(1);
			}
		);
}
