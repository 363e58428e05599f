import { resolve } from 'node:path';
import { fileURLToPath } from 'node:url';

/** The checkout that this file belongs to; every path is made absolute from here, so that the working folder never matters. */
export const ROOT = fileURLToPath(new URL('../../..', import.meta.url)).replace(/\/$/, '');

/**
 * Where one installation keeps what it makes. The product and the tests share nothing but unpacked programs.
 *
 * @typedef {object} Folders
 * @property {string} base      everything below is in here
 * @property {string} database  MariaDB's folder (data, log, secret)
 * @property {string} storage   raw uploads
 * @property {string} logs
 * @property {string} build     the built server, with `workers/` in it
 * @property {string} programs  programs unpacked without root
 */

/**
 * @param {'product' | 'test'} kind
 * @param {string} [root]
 * @returns {Folders}
 */
export function foldersOf(kind, root = ROOT) {
	const base = kind === 'product' ? resolve(root, 'var') : resolve(root, 'var/test');
	return {
		base,
		database: resolve(base, 'mariadb'),
		storage: resolve(base, 'storage'),
		logs: resolve(base, 'log'),
		build: kind === 'product' ? resolve(root, 'build') : resolve(base, 'build'),
		programs: resolve(root, 'var/programs')
	};
}
