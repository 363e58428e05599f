import { linkSync, mkdirSync, readFileSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { dirname } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { isAlive } from './processes.mjs';

/**
 * Takes a lock that only one process on this machine can hold: a file that names its holder.
 *
 * The file is written beside and then linked into place, which fails where the name exists: so it never stands there empty.
 * The holder is named by process id and start time, because ids are used again; the lock of a process that has gone is
 * taken over.
 *
 * @param {string} path
 * @returns {(() => void) | null} gives the lock back; null where another process holds it
 */
export function tryLock(path) {
	mkdirSync(dirname(path), { recursive: true });
	const mine = identityOf(process.pid);
	const draft = `${path}.${process.pid}.draft`;
	for (let attempt = 0; attempt < 5; attempt++) {
		writeFileSync(draft, mine, { mode: 0o600 });
		try {
			linkSync(draft, path);
			return () => {
				if (readHolder(path) === mine) rmSync(path, { force: true });
			};
		} catch (error) {
			if (!(error instanceof Error && 'code' in error && error.code === 'EEXIST')) throw error;
		} finally {
			rmSync(draft, { force: true });
		}
		if (holderOf(path) !== null) return null;
		discardStale(path);
	}
	return null;
}

/**
 * Waits for a lock.
 *
 * @param {string} path
 * @param {{ patienceS?: number, onwait?: () => void }} [options] `onwait` is called once, when there is something to wait for
 * @returns {Promise<(() => void) | null>} null where the other holder kept it too long
 */
export async function waitForLock(path, { patienceS = 300, onwait } = {}) {
	const end = Date.now() + patienceS * 1000;
	for (let first = true; ; first = false) {
		const release = tryLock(path);
		if (release) return release;
		if (first) onwait?.();
		if (Date.now() > end) return null;
		await sleep(50);
	}
}

/**
 * @param {string} path
 * @returns {number | null} the process that holds the lock, null where nobody living does
 */
export function holderOf(path) {
	const holder = readHolder(path);
	if (holder === null) return null;
	const pid = Number(holder.split(' ')[0]);
	return isAlive(pid) && identityOf(pid) === holder ? pid : null;
}

/** @param {string} path */
function readHolder(path) {
	try {
		return readFileSync(path, 'utf8');
	} catch {
		return null;
	}
}

/**
 * Two processes that find the same dead lock must not both remove it: the second would remove the first one's new lock.
 * Renaming to a name of one's own lets exactly one succeed; what was renamed is looked at again before it is thrown away.
 *
 * @param {string} path
 */
function discardStale(path) {
	const aside = `${path}.${process.pid}.stale`;
	try {
		renameSync(path, aside);
	} catch {
		return;
	}
	try {
		if (holderOf(aside) !== null) linkSync(aside, path);
	} finally {
		rmSync(aside, { force: true });
	}
}

/** @param {number} pid */
function identityOf(pid) {
	try {
		const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
		// Field 22, counted behind the program's name, which may hold spaces and brackets: clock ticks since boot.
		const startedAt = stat.slice(stat.lastIndexOf(')') + 2).split(' ')[19];
		return `${pid} ${startedAt}`;
	} catch {
		return `${pid} gone`;
	}
}
