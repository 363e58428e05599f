import { join } from 'node:path';
import { ROOT, foldersOf } from './checkout.mjs';
import { startMariadb } from './mariadb.mjs';

/**
 * Starts the MariaDB that tests use, or joins the one that runs; nothing in it outlives the tests.
 *
 * @param {(line: string) => void} say
 * @returns {Promise<import('./mariadb.mjs').Mariadb>}
 */
export function startTestMariadb(say) {
	const folders = foldersOf('test');
	return startMariadb({
		root: `${ROOT} test`,
		folder: folders.database,
		programs: folders.programs,
		portFile: join(folders.base, 'ports.json'),
		durable: false,
		say
	});
}
