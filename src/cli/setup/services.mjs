import { spawn } from 'node:child_process';
import { closeSync, existsSync, mkdirSync, openSync, readFileSync, renameSync, statSync } from 'node:fs';
import { dirname } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { lastLines } from './debianPackages.mjs';
import { stopProcess } from './processes.mjs';

/**
 * A Node process of ours that runs until it is stopped.
 *
 * @typedef {object} Service
 * @property {string} name
 * @property {() => boolean} alive
 * @property {() => string} lastWords  the end of its log
 * @property {() => Promise<void>} stop
 */

/** A log that has grown past this is kept as `.old` and begun anew at the next start. */
const LARGEST_LOG_BYTES = 10e6;

/**
 * Starts a Node script that writes its log to a file and stops when this process goes.
 *
 * @param {object} wish
 * @param {string} wish.name
 * @param {string[]} wish.args  for Node: options, script, its arguments
 * @param {string} wish.cwd
 * @param {NodeJS.ProcessEnv} wish.env
 * @param {string | null} wish.logFile  null: it writes to the terminal
 * @param {number} [wish.patienceS]  how long it may take to stop before it is forced
 * @returns {Service}
 */
export function startService({ name, args, cwd, env, logFile, patienceS = 20 }) {
	const output = logFile === null ? 'inherit' : openLog(logFile);
	const child = spawn(process.execPath, ['--import', new URL('followParent.mjs', import.meta.url).href, ...args], {
		cwd,
		env,
		// Its own process group: Ctrl-C in the terminal reaches only the start, which stops things in order.
		detached: true,
		stdio: ['ignore', output, output, 'ipc']
	});
	if (typeof output === 'number') closeSync(output);
	let ended = false;
	child.once('error', () => (ended = true));
	child.once('exit', () => (ended = true));
	return {
		name,
		alive: () => !ended,
		lastWords: () => (logFile === null ? '' : lastLines(readFileSync(logFile, 'utf8'))),
		stop: async () => {
			if (!ended && child.pid) await stopProcess(child.pid, { patienceS });
		}
	};
}

/**
 * @param {string} path
 * @returns {number} a file descriptor to append to
 */
function openLog(path) {
	mkdirSync(dirname(path), { recursive: true });
	if (existsSync(path) && statSync(path).size > LARGEST_LOG_BYTES) renameSync(path, `${path}.old`);
	return openSync(path, 'a', 0o600);
}

/**
 * Waits until the server says that it is there.
 *
 * @param {string} url
 * @param {{ alive: () => boolean, patienceS?: number }} options
 * @returns {Promise<boolean>} false where its process ended or never answered
 */
export async function waitForHealth(url, { alive, patienceS = 60 }) {
	const end = Date.now() + patienceS * 1000;
	while (alive() && Date.now() < end) {
		try {
			const response = await fetch(url, { signal: AbortSignal.timeout(2000) });
			await response.arrayBuffer();
			if (response.ok) return true;
		} catch {
			// Not listening yet.
		}
		await sleep(15);
	}
	return false;
}
