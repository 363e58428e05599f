import { mkdirSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { dirname } from 'node:path';

/**
 * Writes a file so that a reader sees the old or the new content and never half of it, also after a crash or on a full disk.
 *
 * @param {string} path
 * @param {string} text
 * @param {number} [mode] for its owner only by default: what lands in `var/` is nobody else's business
 */
export function writeWhole(path, text, mode = 0o600) {
	mkdirSync(dirname(path), { recursive: true });
	const draft = `${path}.${process.pid}.draft`;
	try {
		writeFileSync(draft, text, { mode });
		renameSync(draft, path);
	} catch (error) {
		rmSync(draft, { force: true });
		throw error;
	}
}
