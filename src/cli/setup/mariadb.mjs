import { spawn } from 'node:child_process';
import {
	chmodSync,
	closeSync,
	existsSync,
	mkdirSync,
	mkdtempSync,
	openSync,
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
import { waitForLock } from './fileLock.mjs';
import { findMariadb } from './mariadbPrograms.mjs';
import { candidatePort, choosePort, parsePort, waitForPort } from './ports.mjs';
import { isAlive, run, stopProcess } from './processes.mjs';
import { secretFrom } from './secrets.mjs';
import { writeWhole } from './writeWhole.mjs';

/** The kernel takes 107 bytes for a socket's path; a longer folder gets its socket under the system's temporary folder. */
const LONGEST_SOCKET_PATH = 100;

/** Crash recovery of a large database can take minutes; a person would rather wait than lose it. */
const START_PATIENCE_S = 300;

/**
 * @typedef {object} MariadbWish
 * @property {string} root      the checkout, which spreads the port
 * @property {string} folder    MariaDB's own folder; made where it is missing
 * @property {string} programs  where programs are unpacked without root
 * @property {string} portFile  where ports are remembered
 * @property {boolean} durable  true for people's data; false for tests, which may lose all on a power cut and are faster
 * @property {(line: string) => void} say
 */

/**
 * A running MariaDB, used by this process and perhaps by others.
 *
 * @typedef {object} Mariadb
 * @property {string} url      mysql://… of the database `kerbnote`
 * @property {() => boolean} alive
 * @property {() => string} lastWords  the end of its log
 * @property {() => Promise<void>} stop  gives it up; the last user ends it
 */

/**
 * Starts MariaDB on 127.0.0.1 with its own data folder, or joins the one that already runs on that folder.
 *
 * Each user leaves a file with its process id in `users/`; who stops and finds no other living user ends the server. So two
 * test runs can share one, and one that a killed start left behind is joined and then ended by the next.
 *
 * @param {MariadbWish} wish
 * @returns {Promise<Mariadb>}
 * @throws {SetupError} where it cannot be had, with the reason from its log
 */
export async function startMariadb(wish) {
	const { folder } = wish;
	mkdirSync(join(folder, 'users'), { recursive: true, mode: 0o700 });
	const release = await waitForLock(join(folder, 'start.lock'));
	if (!release) throw new SetupError(`Another start has kept ${folder} locked for minutes; stop it and start again.`);
	try {
		const server = (await joinRunning(folder)) ?? (await startNew(wish));
		const userFile = join(folder, 'users', String(process.pid));
		writeFileSync(userFile, '', { mode: 0o600 });
		return {
			url: `mysql://kerbnote:${secretFrom(join(folder, 'secret'))}@127.0.0.1:${server.port}/kerbnote`,
			alive: () => isAlive(server.pid, dataOf(folder)),
			lastWords: () => logTail(folder),
			stop: () => leave(folder, userFile)
		};
	} finally {
		release();
	}
}

/** @param {string} folder */
const dataOf = (folder) => join(folder, 'data');

/**
 * @param {string} folder
 * @returns {Promise<{ pid: number, port: number } | null>}
 */
async function joinRunning(folder) {
	const state = readState(folder);
	if (!state || !isAlive(state.pid, dataOf(folder))) return null;
	const alive = () => isAlive(state.pid, dataOf(folder));
	const ready = await waitForPort(state.port, { patienceS: START_PATIENCE_S, alive, greeting: true });
	if (ready) return state;
	await stopProcess(state.pid, { words: dataOf(folder), patienceS: 60 });
	return null;
}

/**
 * @param {MariadbWish} wish
 * @returns {Promise<{ pid: number, port: number }>}
 */
async function startNew(wish) {
	const { folder, root, portFile } = wish;
	const programs = await findMariadb(wish.programs, wish.say);
	removeSocketFolder(folder);
	await makeData(folder, programs, wish.say);
	writeInitFile(folder, wish.durable);
	const socket = socketPath(folder);
	const given = parsePort(process.env.KERBNOTE_DATABASE_PORT, 'KERBNOTE_DATABASE_PORT');
	let port = await choosePort({
		root,
		use: 'database',
		file: portFile,
		given,
		variable: 'KERBNOTE_DATABASE_PORT',
		movable: true
	});
	for (let attempt = 1; ; attempt++) {
		const logEnd = logSize(folder);
		const pid = launch(programs, folder, port, socket, wish.durable);
		writeWhole(join(folder, 'server.json'), JSON.stringify({ pid, port, socket }) + '\n');
		const alive = () => isAlive(pid, dataOf(folder));
		if (await waitForPort(port, { patienceS: START_PATIENCE_S, alive, greeting: true })) {
			rmSync(join(folder, 'init.sql'), { force: true });
			return { pid, port };
		}
		const log = readFileSync(join(folder, 'error.log'), 'utf8').slice(logEnd);
		await stopProcess(pid, { words: dataOf(folder) });
		const portTaken = /Address already in use/i.test(log);
		// Somebody took the port between the look and the start.
		if (portTaken && given === null && attempt < 5) port = candidatePort(root, 'database', 50 * attempt);
		else throw whyNotStarted(log, port, folder);
	}
}

/**
 * @param {string} log
 * @param {number} port
 * @param {string} folder
 */
function whyNotStarted(log, port, folder) {
	const details = lastLines(
		log
			.split('\n')
			.filter((line) => /\[ERROR\]/.test(line))
			.join('\n') || log
	);
	if (/Address already in use/i.test(log)) {
		return new SetupError(
			`Port ${port} is in use by another program; choose another port for MariaDB with KERBNOTE_DATABASE_PORT.`
		);
	}
	if (/No space left|Errcode: 28|OS error: 28|Disk full/i.test(log)) {
		return new SetupError(
			`MariaDB could not start because the disk is full (${folder}); free some space and start again.`,
			{ details }
		);
	}
	return new SetupError(`MariaDB did not start; its reasons stand at the end of ${join(folder, 'error.log')}.`, {
		details
	});
}

/**
 * Makes the data folder under another name and moves it into place when it is whole: a start that was cut off leaves nothing
 * half-made to fall over.
 *
 * @param {string} folder
 * @param {import('./mariadbPrograms.mjs').MariadbPrograms} programs
 * @param {(line: string) => void} say
 */
async function makeData(folder, programs, say) {
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
function writeInitFile(folder, durable) {
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
 * @param {import('./mariadbPrograms.mjs').MariadbPrograms} programs
 * @param {string} folder
 * @param {number} port
 * @param {string} socket
 * @param {boolean} durable
 * @returns {number} its process id
 */
function launch(programs, folder, port, socket, durable) {
	const log = openSync(join(folder, 'error.log'), 'a', 0o600);
	const args = [
		'--no-defaults', // must come first
		`--datadir=${dataOf(folder)}`,
		`--socket=${socket}`,
		`--pid-file=${join(folder, 'mariadbd.pid')}`,
		`--port=${port}`,
		`--init-file=${join(folder, 'init.sql')}`,
		'--bind-address=127.0.0.1',
		'--skip-name-resolve',
		'--character-set-server=utf8mb4',
		'--collation-server=utf8mb4_unicode_520_ci',
		'--default-time-zone=+00:00',
		'--max-allowed-packet=64M',
		'--innodb-buffer-pool-size=256M',
		...(durable ? durableSettings(folder) : relaxedSettings),
		...(programs.base ? [`--basedir=${programs.base}`, `--lc-messages-dir=${join(programs.base, 'share/mysql')}`] : []),
		...(process.getuid?.() === 0 ? ['--user=root'] : [])
	];
	try {
		// Its own process group: Ctrl-C in the terminal must reach the server first and MariaDB last.
		const child = spawn(programs.server, args, {
			cwd: folder,
			env: programs.env,
			detached: true,
			stdio: ['ignore', log, log]
		});
		if (child.pid === undefined) throw new SetupError(`MariaDB's server ${programs.server} could not be run.`);
		child.unref();
		return child.pid;
	} finally {
		closeSync(log);
	}
}

/**
 * Every commit is on the disk before it is answered, and the binary log allows restoring to a moment within two weeks.
 *
 * @param {string} folder
 */
const durableSettings = (folder) => [
	'--innodb-flush-log-at-trx-commit=1',
	'--server-id=1',
	`--log-bin=${join(dataOf(folder), 'binlog')}`,
	'--binlog-format=ROW',
	'--sync-binlog=1',
	'--binlog-expire-logs-seconds=1209600',
	'--max-binlog-size=64M'
];

const relaxedSettings = ['--skip-log-bin', '--innodb-flush-log-at-trx-commit=0', '--innodb-doublewrite=0'];

/**
 * @param {string} folder
 * @param {string} userFile
 */
async function leave(folder, userFile) {
	const release = await waitForLock(join(folder, 'start.lock'), { patienceS: 60 });
	try {
		rmSync(userFile, { force: true });
		const state = readState(folder);
		if (!state || livingUsers(folder).length > 0) return;
		await stopProcess(state.pid, { words: dataOf(folder), patienceS: 60 });
		removeSocketFolder(folder);
		rmSync(join(folder, 'server.json'), { force: true });
	} finally {
		release?.();
	}
}

/** @param {string} folder */
function livingUsers(folder) {
	return readdirSync(join(folder, 'users')).filter((name) => {
		if (name === 'kept' || isAlive(Number(name), 'node')) return true;
		rmSync(join(folder, 'users', name), { force: true });
		return false;
	});
}

/**
 * @param {string} folder
 * @returns {{ pid: number, port: number, socket: string } | null}
 */
function readState(folder) {
	try {
		const state = JSON.parse(readFileSync(join(folder, 'server.json'), 'utf8'));
		return Number.isInteger(state.pid) && Number.isInteger(state.port) ? state : null;
	} catch {
		return null;
	}
}

/** @param {string} folder */
function socketPath(folder) {
	const beside = join(folder, 's.sock');
	if (Buffer.byteLength(beside) <= LONGEST_SOCKET_PATH) return beside;
	return join(mkdtempSync(join(tmpdir(), 'kerbnote-')), 's.sock');
}

/** @param {string} folder */
function removeSocketFolder(folder) {
	const socket = readState(folder)?.socket;
	if (socket && dirname(socket) !== folder) rmSync(dirname(socket), { recursive: true, force: true });
}

/**
 * @param {string} folder
 * @returns {number} length of the log so far, in characters that `slice` can skip; a huge log is begun anew
 */
function logSize(folder) {
	const path = join(folder, 'error.log');
	if (!existsSync(path)) return 0;
	if (statSync(path).size > 5e6) renameSync(path, `${path}.old`);
	return existsSync(path) ? readFileSync(path, 'utf8').length : 0;
}

/** @param {string} folder */
function logTail(folder) {
	try {
		return lastLines(readFileSync(join(folder, 'error.log'), 'utf8'));
	} catch {
		return '';
	}
}
