import { createHash } from 'node:crypto';
import { readFileSync, readdirSync } from 'node:fs';
import { join } from 'node:path';

/** What a build is made from. */
const FOLDERS = ['src', 'static', 'migrations', 'seeds'];
const FILES = ['package-lock.json', 'svelte.config.js', 'vite.config.ts', 'tailwind.config.js', 'tsconfig.json'];

/** Tests, benchmarks and the plain scripts are not built. */
const NOT_BUILT = /\.(test|bench)\.ts$|\.mjs$|(^|\/)\.|~$/;

/**
 * A fingerprint of everything that a build is made from: names and contents, not times, so that a fresh clone and an old
 * checkout of the same commit agree.
 *
 * @param {string} root
 * @returns {string} 64 hex digits
 */
export function sourceHash(root) {
	const hash = createHash('sha256');
	const names = [...FILES, ...FOLDERS.flatMap((folder) => filesBelow(root, folder))].filter(
		(name) => !NOT_BUILT.test(name)
	);
	for (const name of names.sort()) {
		let content;
		try {
			content = readFileSync(join(root, name));
		} catch {
			continue; // a file that went between the list and the reading, or one of FILES that is not there
		}
		hash.update(`${name}\0${content.length}\0`).update(content);
	}
	return hash.digest('hex');
}

/**
 * @param {string} root
 * @param {string} folder
 * @returns {string[]} relative paths
 */
function filesBelow(root, folder) {
	try {
		return readdirSync(join(root, folder), { recursive: true, withFileTypes: true })
			.filter((entry) => entry.isFile())
			.map((entry) => join(entry.parentPath ?? entry.path, entry.name).slice(root.length + 1));
	} catch {
		return [];
	}
}
