import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { SetupError } from './SetupError.mjs';
import { lastLines } from './debianPackages.mjs';
import { run } from './processes.mjs';

/**
 * Runs one of the built commands (migrate, seed) to its end.
 *
 * @param {object} wish
 * @param {string} wish.name   the file's name in `workers/` of the build
 * @param {string} wish.failure  the sentence that is shown where it fails
 * @param {string} wish.root
 * @param {NodeJS.ProcessEnv} wish.env  of `productEnvironment`
 * @throws {SetupError}
 */
export async function runBuilt({ name, failure, root, env }) {
	const { code, output } = await run(process.execPath, [builtCommand(env, name)], { cwd: root, env });
	if (code !== 0) throw new SetupError(failure, { details: lastLines(output, 12) });
}

/**
 * @param {NodeJS.ProcessEnv} env
 * @param {string} name
 * @returns {string} absolute path
 */
export function builtCommand(env, name) {
	const script = join(env.KERBNOTE_BUILD ?? 'build', 'workers', `${name}.js`);
	if (!existsSync(script))
		throw new SetupError(`The build is not whole: ${script} is missing; delete its folder and start again.`);
	return script;
}
