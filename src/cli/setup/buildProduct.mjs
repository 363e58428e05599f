import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { SetupError } from './SetupError.mjs';
import { lastLines } from './debianPackages.mjs';
import { run } from './processes.mjs';
import { sourceHash } from './sourceHash.mjs';
import { writeWhole } from './writeWhole.mjs';

/**
 * Builds the server and its workers where the sources have changed since the last build in that folder.
 *
 * @param {string} root
 * @param {string} build  the folder to build into
 * @param {(line: string) => void} say
 * @returns {Promise<boolean>} whether there was something to do
 * @throws {SetupError} with the builder's last words
 */
export async function buildProduct(root, build, say) {
	const hash = sourceHash(root);
	if (builtHash(build) === hash && existsSync(join(build, 'index.js'))) return false;
	say('Building');
	const vite = join(root, 'node_modules/vite/bin/vite.js');
	const env = { ...process.env, KERBNOTE_BUILD: build, NODE_ENV: 'production' };
	// The first build empties the folder, so the workers come second.
	for (const args of [['build'], ['build', '--mode', 'workers']]) {
		const { code, output } = await run(process.execPath, [vite, ...args, '--logLevel', 'warn'], { cwd: root, env });
		if (code === 0) continue;
		if (/ENOSPC/.test(output)) throw new SetupError(`The disk is full (${build}); free some space and start again.`);
		throw new SetupError('The build failed.', { details: lastLines(output, 25) });
	}
	writeWhole(join(build, 'sources.sha256'), hash + '\n', 0o644);
	return true;
}

/**
 * @param {string} build
 * @returns {string} '' where nothing was built
 */
export function builtHash(build) {
	try {
		return readFileSync(join(build, 'sources.sha256'), 'utf8').trim();
	} catch {
		return '';
	}
}
