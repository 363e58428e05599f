import { availableParallelism } from 'node:os';
import { join } from 'node:path';
import { ROOT, foldersOf } from './checkout.mjs';
import { findChromium } from './chromium.mjs';
import { checkRoom } from './diskSpace.mjs';
import { waitForLock } from './fileLock.mjs';
import { installAndBuild, together } from './prepare.mjs';
import { run } from './processes.mjs';
import { report } from './report.mjs';
import { runTasks } from './schedule.mjs';
import { SetupError } from './SetupError.mjs';
import { StopRequested, listenForStop } from './stopRequest.mjs';
import { parseTestArguments } from './testArguments.mjs';
import { startTestMariadb } from './testMariadb.mjs';
import { stageWork } from './testStages.mjs';

const folders = foldersOf('test');

/** @param {string} line */
const say = (line) => console.log(line);

/**
 * What binds the stages: the journeys need the build, and nothing else beside them that would slow their pages. Listed so that
 * the long ones begin first and two cores are busy to the end.
 *
 * @type {Array<{ name: typeof import('./testArguments.mjs').STAGES[number], after?: string[], alone?: boolean }>}
 */
const ORDER = [
	{ name: 'db' },
	{ name: 'core' },
	{ name: 'build' },
	{ name: 'types' },
	{ name: 'lint' },
	{ name: 'browser' },
	{ name: 'format' },
	{ name: 'e2e', after: ['build'], alone: true }
];

/**
 * `npm test`: sets up what is missing, runs every stage and prints only what failed, a line per stage and the sum.
 *
 * @param {string[]} args  see parseTestArguments
 * @returns {Promise<number>} exit code: 0 where all passed
 */
export async function main(args) {
	const stop = listenForStop();
	/** @type {Array<() => unknown>} */
	const closing = [];
	const sum = { passed: 0, failed: 0 };
	try {
		await runStages(parseTestArguments(args), stop, closing, sum);
	} catch (error) {
		sum.failed += 1;
		if (!(error instanceof StopRequested) && !stop.requested()) report(error);
	} finally {
		for (const close of closing.reverse()) await close();
	}
	if (stop.requested()) {
		say('Stopped before the end.');
		return 130;
	}
	say(`${sum.passed} passed, ${sum.failed} failed`);
	return sum.failed === 0 ? 0 : 1;
}

/**
 * @param {import('./testArguments.mjs').TestWish} wish
 * @param {import('./stopRequest.mjs').StopWatch} stop
 * @param {Array<() => unknown>} closing
 * @param {{ passed: number, failed: number }} sum
 */
async function runStages(wish, stop, closing, sum) {
	checkRoom(ROOT, folders);
	const needs = /** @param {string[]} names */ (names) => wish.stages.some((stage) => names.includes(stage));
	const whole = needs(['build', 'e2e']) ? await oneAtATime() : () => {};
	closing.push(whole);
	const startDatabase = async () => {
		const database = await startTestMariadb(say);
		closing.push(database.stop);
		return database.url;
	};
	const [databaseUrl, chromium] = await together([
		needs(['db', 'e2e']) ? startDatabase() : Promise.resolve(''),
		needs(['browser', 'e2e']) ? findChromium(folders.programs, say) : Promise.resolve(''),
		installAndSync(stop.check)
	]);
	stop.check();

	const work = stageWork({ databaseUrl, chromium, long: wish.long, rest: wish.rest });
	const stages = withBuild(wish.stages);
	/** @type {Map<string, number>} */
	const startedAt = new Map();
	const tasks = ORDER.filter(({ name }) => stages.includes(name)).map((stage) => ({
		...stage,
		work: async () => {
			stop.check();
			startedAt.set(stage.name, Date.now());
			return work[stage.name]();
		}
	}));
	const results = await runTasks(tasks, {
		places: Math.max(2, availableParallelism()),
		well: (outcome) => outcome.failed === 0,
		onend: ({ name }, outcome) => {
			if (stop.requested()) return;
			sum.passed += outcome.passed;
			sum.failed += outcome.failed;
			const seconds = (Date.now() - (startedAt.get(name) ?? 0)) / 1000;
			if (outcome.failed > 0) say(`\n${outcome.output.trim()}\n`);
			say(stageLine(name, outcome, seconds));
		}
	});
	stop.check();
	for (const { name } of tasks) {
		if (results.has(name)) continue;
		sum.failed += 1;
		say(`${name.padEnd(8)} not run, because the build failed`);
	}
}

/**
 * @param {string} name
 * @param {import('./testReports.mjs').Outcome} outcome
 * @param {number} seconds
 */
function stageLine(name, { passed, failed }, seconds) {
	const counts = [passed > 0 ? `${passed} passed` : '', failed > 0 ? `${failed} failed` : '']
		.filter(Boolean)
		.join(', ');
	return `${name.padEnd(8)} ${(counts || 'good').padEnd(24)} ${seconds.toFixed(1).padStart(6)} s`;
}

/**
 * The journeys run against a build, so they bring it with them.
 *
 * @param {readonly string[]} stages
 * @returns {readonly string[]}
 */
function withBuild(stages) {
	return stages.includes('e2e') ? [...stages, 'build'] : stages;
}

/** Two whole runs in one checkout would build over each other and share the journeys' database. */
async function oneAtATime() {
	const release = await waitForLock(join(folders.base, 'test.lock'), {
		patienceS: 1200,
		onwait: () => say('Waiting for another test run in this folder')
	});
	if (!release)
		throw new SetupError('Another test run has been going on in this folder for 20 minutes; stop it and start again.');
	return release;
}

/** @param {() => void} check */
async function installAndSync(check) {
	await installAndBuild({ root: ROOT, say, check });
	// Types of routes that were added since the packages were installed.
	const { code, output } = await run(
		process.execPath,
		[join(ROOT, 'node_modules/@sveltejs/kit/svelte-kit.js'), 'sync'],
		{ cwd: ROOT }
	);
	if (code !== 0) throw new SetupError('svelte-kit sync failed.', { details: output });
}
