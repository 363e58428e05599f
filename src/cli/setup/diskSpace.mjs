import { accessSync, constants, existsSync, mkdirSync, statfsSync } from 'node:fs';
import { join } from 'node:path';
import { SetupError } from './SetupError.mjs';

/** Measured sizes of what is made at a first start, in MB: packages, the empty database with its logs, the build. */
const NEEDS_MB = { node_modules: 450, database: 250, build: 60 };
const ALWAYS_MB = 50;

/**
 * Looks whether this account may write to the checkout and whether there is room, before anything is begun.
 *
 * @param {string} root
 * @param {import('./checkout.mjs').Folders} folders
 * @throws {SetupError}
 */
export function checkRoom(root, folders) {
	mkdirSync(folders.base, { recursive: true, mode: 0o700 });
	for (const folder of [root, folders.base]) accessSync(folder, constants.W_OK | constants.X_OK);
	const neededMb =
		ALWAYS_MB +
		(existsSync(join(root, 'node_modules')) ? 0 : NEEDS_MB.node_modules) +
		(existsSync(folders.database) ? 0 : NEEDS_MB.database) +
		(existsSync(folders.build) ? 0 : NEEDS_MB.build);
	const { bavail, bsize } = statfsSync(folders.base);
	const freeMb = Math.floor((bavail * bsize) / 1e6);
	if (!(freeMb >= neededMb)) {
		throw new SetupError(
			`The disk is nearly full: ${freeMb} MB are free in ${root} and about ${neededMb} MB are needed; free some space and start again.`
		);
	}
}
