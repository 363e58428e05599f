import { existsSync } from 'node:fs';
import { delimiter, join } from 'node:path';
import { SetupError } from './SetupError.mjs';
import { bringDebianPackages, lastLines, libraryFolders } from './debianPackages.mjs';
import { findProgram, run } from './processes.mjs';

/** The server and its client tools without the service, configuration and account that the full package sets up. */
const PACKAGES = ['mariadb-server-core', 'mariadb-client-core'];

/**
 * @typedef {object} MariadbPrograms
 * @property {string} server     absolute path of mariadbd
 * @property {string} installer  absolute path of mariadb-install-db
 * @property {string | null} base  where an unpacked set has its `usr`; null for programs of the system
 * @property {NodeJS.ProcessEnv} env  the environment that they run in
 */

/**
 * Finds MariaDB's programs, and brings them onto the machine where they are missing.
 *
 * @param {string} programsFolder  where programs are unpacked without root
 * @param {(line: string) => void} say
 * @returns {Promise<MariadbPrograms>}
 * @throws {SetupError} where MariaDB is missing and could not be brought
 */
export async function findMariadb(programsFolder, say) {
	const folder = join(programsFolder, 'mariadb');
	const found = ofSystem() ?? ofFolder(folder);
	if (found) return found;
	const how = await bringDebianPackages({ what: 'MariaDB', packages: PACKAGES, folder }, say);
	const brought = how === 'installed' ? ofSystem() : ofFolder(folder);
	if (!brought)
		throw new SetupError(
			`The packages ${PACKAGES.join(' and ')} brought no mariadbd; install MariaDB by hand and start again.`
		);
	const { code, output } = await run(brought.server, ['--no-defaults', '--version'], { env: brought.env });
	if (code !== 0) {
		const command = `sudo apt-get install -y --no-install-recommends ${PACKAGES.join(' ')}`;
		throw new SetupError(
			`MariaDB does not run on this machine as it was unpacked; run this and start again: ${command}`,
			{
				details: lastLines(output)
			}
		);
	}
	return brought;
}

/** @returns {MariadbPrograms | null} */
function ofSystem() {
	const server = findProgram(['mariadbd', 'mysqld'], ['/usr/sbin', '/usr/libexec']);
	const installer = findProgram(['mariadb-install-db', 'mysql_install_db']);
	// install-db starts the server through helpers of the client package.
	const helper = findProgram(['my_print_defaults']);
	return server && installer && helper ? { server, installer, base: null, env: process.env } : null;
}

/**
 * @param {string} folder
 * @returns {MariadbPrograms | null}
 */
function ofFolder(folder) {
	const server = join(folder, 'usr/sbin/mariadbd');
	const installer = join(folder, 'usr/bin/mariadb-install-db');
	if (!existsSync(server) || !existsSync(installer)) return null;
	const libraries = [...libraryFolders(folder), process.env.LD_LIBRARY_PATH].filter(Boolean).join(delimiter);
	const path = [join(folder, 'usr/bin'), join(folder, 'usr/sbin'), process.env.PATH].filter(Boolean).join(delimiter);
	return {
		server,
		installer,
		base: join(folder, 'usr'),
		env: { ...process.env, LD_LIBRARY_PATH: libraries, PATH: path }
	};
}
