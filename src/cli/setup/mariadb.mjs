import { mkdirSync, readFileSync, readdirSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { SetupError } from './SetupError.mjs';
import { holderOf, tryLock, waitForLock } from './fileLock.mjs';
import {
	chooseSocket,
	dataOf,
	logOf,
	logSize,
	logTail,
	makeData,
	readState,
	removeSocketFolder,
	writeInitFile
} from './mariadbFolder.mjs';
import { launchMariadb, whyNotStarted } from './mariadbProcess.mjs';
import { findMariadb } from './mariadbPrograms.mjs';
import { choosePort, parsePort, waitForPort } from './ports.mjs';
import { isAlive, stopProcess } from './processes.mjs';
import { secretFrom } from './secrets.mjs';
import { writeWhole } from './writeWhole.mjs';

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
		const signOff = tryLock(join(folder, 'users', String(process.pid))) ?? (() => {});
		return {
			url: `mysql://kerbnote:${secretFrom(join(folder, 'secret'))}@127.0.0.1:${server.port}/kerbnote`,
			alive: () => isAlive(server.pid, wordsOf(folder)),
			lastWords: () => logTail(folder),
			stop: () => leave(folder, signOff)
		};
	} finally {
		release();
	}
}

/**
 * What stands in the command line of the server on this folder and of no other process.
 *
 * @param {string} folder
 */
const wordsOf = (folder) => `--datadir=${dataOf(folder)} `;

/**
 * @param {string} folder
 * @returns {Promise<{ pid: number, port: number } | null>}
 */
async function joinRunning(folder) {
	const state = readState(folder);
	if (!state || !isAlive(state.pid, wordsOf(folder))) return null;
	const alive = () => isAlive(state.pid, wordsOf(folder));
	const ready = await waitForPort(state.port, { patienceS: START_PATIENCE_S, alive, greeting: true });
	if (ready) return state;
	await stopProcess(state.pid, { words: wordsOf(folder), patienceS: 60 });
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
	const socket = chooseSocket(folder);
	const given = parsePort(process.env.KERBNOTE_DATABASE_PORT, 'KERBNOTE_DATABASE_PORT');
	for (let attempt = 1; ; attempt++) {
		const port = await choosePort({
			root,
			use: 'database',
			file: portFile,
			given,
			variable: 'KERBNOTE_DATABASE_PORT',
			movable: true
		});
		const logEnd = logSize(folder);
		const pid = launchMariadb(programs, folder, port, socket, wish.durable);
		writeWhole(join(folder, 'server.json'), JSON.stringify({ pid, port, socket }) + '\n');
		const alive = () => isAlive(pid, wordsOf(folder));
		if (await waitForPort(port, { patienceS: START_PATIENCE_S, alive, greeting: true })) {
			rmSync(join(folder, 'init.sql'), { force: true });
			return { pid, port };
		}
		const log = readFileSync(logOf(folder), 'utf8').slice(logEnd);
		await stopProcess(pid, { words: wordsOf(folder) });
		// Where somebody took the port between the look and the start, the next look finds another.
		if (!/Address already in use/i.test(log) || given !== null || attempt === 5) throw whyNotStarted(log, port, folder);
	}
}

/**
 * @param {string} folder
 * @param {() => void} signOff
 */
async function leave(folder, signOff) {
	const release = await waitForLock(join(folder, 'start.lock'), { patienceS: 60 });
	try {
		signOff();
		const state = readState(folder);
		if (!state || livingUsers(folder).length > 0) return;
		await stopProcess(state.pid, { words: wordsOf(folder), patienceS: 60 });
		removeSocketFolder(folder);
		rmSync(join(folder, 'server.json'), { force: true });
	} finally {
		release?.();
	}
}

/** @param {string} folder */
function livingUsers(folder) {
	return readdirSync(join(folder, 'users')).filter((name) => {
		if (name === 'kept' || holderOf(join(folder, 'users', name)) !== null) return true;
		rmSync(join(folder, 'users', name), { force: true });
		return false;
	});
}
