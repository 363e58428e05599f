import {
	chmodSync,
	existsSync,
	mkdirSync,
	mkdtempSync,
	readFileSync,
	readdirSync,
	renameSync,
	rmSync,
	statSync,
	writeFileSync
} from 'node:fs';
import { hostname, tmpdir, userInfo } from 'node:os';
import { dirname, join } from 'node:path';
import { SetupError } from './SetupError.mjs';
import { lastLines } from './debianPackages.mjs';
import { run } from './processes.mjs';
import { secretFrom } from './secrets.mjs';

/** The kernel takes 107 bytes for a socket's path; a longer folder gets its socket under the system's temporary folder. */
const LONGEST_SOCKET_PATH = 100;

/** @param {string} folder  MariaDB's own */
export const dataOf = (folder) => join(folder, 'data');

/** @param {string} folder */
export const logOf = (folder) => join(folder, 'error.log');

/**
 * Makes the data folder under another name and moves it into place when it is whole: a start that was cut off leaves nothing
 * half-made to fall over.
 *
 * @param {string} folder
 * @param {import('./mariadbPrograms.mjs').MariadbPrograms} programs
 * @param {(line: string) => void} say
 */
export async function makeData(folder, programs, say) {
	for (const name of readdirSync(folder)) {
		if (name.startsWith('data.draft')) rmSync(join(folder, name), { recursive: true, force: true });
	}
	if (existsSync(join(dataOf(folder), 'mysql'))) return;
	say('Making the database folder');
	const draft = join(folder, `data.draft.${process.pid}`);
	mkdirSync(draft, { mode: 0o700 });
	const { code, output } = await run(
		programs.installer,
		[
			'--no-defaults',
			`--datadir=${draft}`,
			// The database's own superuser is the account that starts it, by the socket and without a password.
			'--auth-root-authentication-method=socket',
			`--auth-root-socket-user=${accountName()}`,
			'--skip-test-db',
			...(programs.base ? [`--basedir=${programs.base}`] : []),
			...(process.getuid?.() === 0 ? ['--user=root'] : [])
		],
		{ env: programs.env }
	);
	if (code !== 0) {
		rmSync(draft, { recursive: true, force: true });
		if (/No space left|Errcode: 28|OS error: 28/i.test(output)) {
			throw new SetupError(`The disk is full (${folder}); the database needs about 150 MB to begin with.`);
		}
		throw new SetupError(`MariaDB could not make its folder ${folder}.`, { details: lastLines(output) });
	}
	renameSync(draft, dataOf(folder));
}

/** @returns {string} an account without an entry in the system's list (as in some containers) has no name */
function accountName() {
	try {
		return userInfo().username;
	} catch {
		return 'root';
	}
}

/**
 * The statements that MariaDB runs before it takes connections. Accounts are set again at every start, so that the secret
 * file stays the one truth.
 *
 * @param {string} folder
 * @param {boolean} durable
 */
export function writeInitFile(folder, durable) {
	const secret = secretFrom(join(folder, 'secret'));
	const statements = [
		`DROP USER IF EXISTS ''@'localhost', ''@'${hostname().replaceAll("'", '')}';`,
		'CREATE DATABASE IF NOT EXISTS kerbnote CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci;',
		"CREATE USER IF NOT EXISTS 'kerbnote'@'127.0.0.1';",
		`ALTER USER 'kerbnote'@'127.0.0.1' IDENTIFIED BY '${secret}';`,
		"GRANT ALL ON kerbnote.* TO 'kerbnote'@'127.0.0.1';",
		// Tests make databases of their own.
		...(durable ? [] : ["GRANT ALL ON `kerbnote\\_%`.* TO 'kerbnote'@'127.0.0.1';"])
	];
	writeFileSync(join(folder, 'init.sql'), statements.join('\n') + '\n', { mode: 0o600 });
	chmodSync(join(folder, 'init.sql'), 0o600);
}

/**
 * What the last start wrote down about its server, which may have gone since.
 *
 * @param {string} folder
 * @returns {{ pid: number, port: number, socket: string } | null}
 */
export function readState(folder) {
	try {
		const state = JSON.parse(readFileSync(join(folder, 'server.json'), 'utf8'));
		return Number.isInteger(state.pid) && Number.isInteger(state.port) ? state : null;
	} catch {
		return null;
	}
}

/**
 * @param {string} folder
 * @returns {string} where MariaDB's socket goes
 */
export function chooseSocket(folder) {
	const beside = join(folder, 's.sock');
	if (Buffer.byteLength(beside) <= LONGEST_SOCKET_PATH) return beside;
	return join(mkdtempSync(join(tmpdir(), 'kerbnote-')), 's.sock');
}

/**
 * Removes the folder that the last start made for its socket, where it made one.
 *
 * @param {string} folder
 */
export function removeSocketFolder(folder) {
	const socket = readState(folder)?.socket;
	if (socket && dirname(socket) !== folder) rmSync(dirname(socket), { recursive: true, force: true });
}

/**
 * @param {string} folder
 * @returns {number} length of the log so far, in characters that `slice` can skip; a huge log is begun anew
 */
export function logSize(folder) {
	const path = logOf(folder);
	if (!existsSync(path)) return 0;
	if (statSync(path).size > 5e6) renameSync(path, `${path}.old`);
	return existsSync(path) ? readFileSync(path, 'utf8').length : 0;
}

/** @param {string} folder */
export function logTail(folder) {
	try {
		return lastLines(readFileSync(logOf(folder), 'utf8'));
	} catch {
		return '';
	}
}
