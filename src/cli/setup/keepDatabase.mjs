import { rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { foldersOf } from './checkout.mjs';
import { report } from './report.mjs';
import { startTestMariadb } from './testMariadb.mjs';

/**
 * Starts the tests' MariaDB and leaves it running for as long as somebody works, or ends it.
 *
 * @param {string[]} args  [] or ['stop']
 * @returns {Promise<number>} exit code
 */
export async function main(args) {
	const keep = join(foldersOf('test').database, 'users/kept');
	try {
		const database = await startTestMariadb((line) => console.error(line));
		if (args[0] === 'stop') rmSync(keep, { force: true });
		else writeFileSync(keep, '', { mode: 0o600 });
		await database.stop();
		if (args[0] !== 'stop') console.log(database.url);
		return 0;
	} catch (error) {
		report(error);
		return 1;
	}
}
