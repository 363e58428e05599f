import { spawn } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { delimiter, join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';

/** The commands that `run` has going, so that a stop request can end them too. */
const running = new Set();

/**
 * Runs a program to its end and collects what it prints.
 *
 * @param {string} file
 * @param {string[]} args
 * @param {{ cwd?: string, env?: NodeJS.ProcessEnv, input?: string, inherit?: boolean, whole?: boolean }} [options]
 *   `inherit`: the program talks to the terminal itself; `whole`: it is never broken off, not by Ctrl-C either (a package
 *   manager that is stopped half-way leaves a machine to repair)
 * @returns {Promise<{ code: number, stdout: string, output: string }>} `output`: standard output and error as they came;
 *   a program that cannot be started or dies by a signal has the code -1
 */
export function run(file, args, options = {}) {
	return new Promise((done) => {
		const child = spawn(file, args, {
			cwd: options.cwd,
			env: options.env ?? process.env,
			stdio: options.inherit ? 'inherit' : ['pipe', 'pipe', 'pipe'],
			detached: options.whole
		});
		if (!options.whole) running.add(child);
		let stdout = '';
		let output = '';
		child.stdout?.setEncoding('utf8').on('data', (text) => {
			stdout += text;
			output += text;
		});
		child.stderr?.setEncoding('utf8').on('data', (text) => (output += text));
		// A program that ends before it has read its input is not a reason to fall over.
		child.stdin?.on('error', () => {});
		child.stdin?.end(options.input ?? '');
		child.on('error', (error) => {
			running.delete(child);
			done({ code: -1, stdout, output: output + error.message });
		});
		child.on('close', (code) => {
			running.delete(child);
			done({ code: code ?? -1, stdout, output });
		});
	});
}

/** Asks every command that `run` has going to end. */
export function stopRunning() {
	for (const child of running) child.kill('SIGTERM');
}

/**
 * Looks a program up on PATH and in the folders of system programs, which are not on a normal user's PATH.
 *
 * @param {string[]} names in order of preference
 * @param {string[]} [moreFolders] looked in first
 * @returns {string | null} an absolute path
 */
export function findProgram(names, moreFolders = []) {
	const folders = [
		...moreFolders,
		...(process.env.PATH ?? '').split(delimiter),
		'/usr/sbin',
		'/usr/bin',
		'/usr/local/bin'
	];
	for (const name of names) {
		for (const folder of folders) {
			if (folder && existsSync(join(folder, name))) return join(folder, name);
		}
	}
	return null;
}

/**
 * Whether a process lives and, where `words` is given, is the one that is meant: process ids are used again.
 *
 * @param {number} pid
 * @param {string} [words] must stand in its command line
 * @returns {boolean}
 */
export function isAlive(pid, words) {
	if (!(pid > 0)) return false;
	try {
		process.kill(pid, 0);
	} catch (error) {
		// EPERM: it lives, but belongs to somebody else.
		if (!(error instanceof Error && 'code' in error && error.code === 'EPERM')) return false;
	}
	try {
		// A zombie has an empty command line and state Z; it has ended for all that matters here.
		if (/^\d+ \(.*\) [ZX]/s.test(readFileSync(`/proc/${pid}/stat`, 'utf8'))) return false;
		if (words === undefined) return true;
		const commandLine = readFileSync(`/proc/${pid}/cmdline`, 'utf8').replaceAll('\0', ' ');
		// A process that is ending loses its command line before it lets go of its files.
		return commandLine === '' || commandLine.includes(words);
	} catch {
		return words === undefined;
	}
}

/**
 * Ends a process: asks first, and forces it when it has not gone in time.
 *
 * @param {number} pid
 * @param {{ words?: string, patienceS?: number }} [options] `words` as in `isAlive`
 * @returns {Promise<boolean>} whether it went by itself
 */
export async function stopProcess(pid, { words, patienceS = 20 } = {}) {
	if (!isAlive(pid, words)) return true;
	signal(pid, 'SIGTERM');
	const end = Date.now() + patienceS * 1000;
	while (Date.now() < end) {
		if (!isAlive(pid, words)) return true;
		await sleep(20);
	}
	signal(pid, 'SIGKILL');
	return false;
}

/**
 * @param {number} pid
 * @param {NodeJS.Signals} name
 */
function signal(pid, name) {
	try {
		process.kill(pid, name);
	} catch {
		// It went between the look and the signal.
	}
}
