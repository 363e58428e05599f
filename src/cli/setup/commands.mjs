import { existsSync } from 'node:fs';
import { join, relative } from 'node:path';
import { SetupError } from './SetupError.mjs';
import { ROOT } from './checkout.mjs';
import { lastLines } from './debianPackages.mjs';
import { run } from './processes.mjs';

/**
 * How a program of ours is run: from the build by plain Node, or, while somebody develops, from its source.
 *
 * @typedef {'built' | 'source'} Way
 */

/**
 * The arguments for Node that run one of the programs in `src/cli`.
 *
 * @param {string} name  migrate, seed, worker, admin
 * @param {Way} way
 * @param {string} build  the folder of the build
 * @returns {string[]}
 * @throws {SetupError} where the build is not whole
 */
export function programArguments(name, way, build) {
	if (way === 'source') return ['--import', 'tsx', join(ROOT, 'src/cli', `${name}.ts`)];
	const script = join(build, 'workers', `${name}.js`);
	if (existsSync(script)) return [script];
	throw new SetupError(
		`The build is not whole, ${relative(ROOT, script)} is missing; delete ${relative(ROOT, build)} and start again.`
	);
}

/**
 * Brings the schema to its newest step and, where wanted, puts the demo in. Both do nothing where that has been done.
 *
 * @param {object} wish
 * @param {NodeJS.ProcessEnv} wish.env  of `productEnvironment`
 * @param {boolean} wish.demo
 * @param {Way} wish.way
 * @param {string} wish.build
 * @param {string} wish.database  its name in messages
 * @param {(line: string) => void} wish.say
 * @throws {SetupError} with the program's last words
 */
export async function migrateAndSeed({ env, demo, way, build, database, say }) {
	await runProgram(programArguments('migrate', way, build), env, `${database} could not be brought up to date.`);
	if (!demo) return;
	if (!existsSync(env.KERBNOTE_DEMO_ACCOUNTS ?? '')) say('Putting the demo in');
	await runProgram(
		programArguments('seed', way, build),
		env,
		`The demo could not be put into ${database.replace(/^The/, 'the')}.`
	);
}

/**
 * @param {string[]} args
 * @param {NodeJS.ProcessEnv} env
 * @param {string} failure
 */
async function runProgram(args, env, failure) {
	const { code, output } = await run(process.execPath, args, { cwd: ROOT, env });
	if (code === 0) return;
	const words = output.replaceAll(/^\s+at .*\n?/gm, ''); // where in the code it was thrown helps nobody here
	if (/ENOSPC|is full/.test(output))
		throw new SetupError('The disk is full; free some space and start again.', { details: lastLines(words) });
	throw new SetupError(failure, { details: lastLines(words, 12) });
}
