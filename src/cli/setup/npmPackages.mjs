import { createHash } from 'node:crypto';
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { SetupError } from './SetupError.mjs';
import { lastLines } from './debianPackages.mjs';
import { findProgram, run } from './processes.mjs';

/**
 * Installs the packages of package-lock.json, the development ones too, where what is installed is not what it lists.
 *
 * @param {string} root
 * @param {(line: string) => void} say
 * @throws {SetupError} with npm's last words
 */
export async function installNpmPackages(root, say) {
	const lock = readFileSync(join(root, 'package-lock.json'), 'utf8');
	const lockHash = createHash('sha256').update(lock).digest('hex');
	const record = join(root, 'node_modules/.package-lock.json');
	const mark = join(root, 'node_modules/.kerbnote-lock');
	if (existsSync(record) && existsSync(mark) && readFileSync(mark, 'utf8') === lockHash) return;
	if (packagesMatch(JSON.parse(lock), readJson(record))) return;
	const npm = findProgram(['npm']);
	if (!npm) throw new SetupError('npm is missing; install it beside Node and start again.');
	say('Installing the npm packages (npm ci)');
	const { code, output } = await run(npm, ['ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel=error'], {
		cwd: root
	});
	if (code === 0) return writeFileSync(mark, lockHash);
	if (/ENOSPC/.test(output)) {
		throw new SetupError(
			`The disk is full (${root}); the packages need about 350 MB; free some space and start again.`
		);
	}
	if (/EACCES|EPERM|EROFS/.test(output)) {
		throw new SetupError(
			`This account may not write to ${root}; change the folder's owner or start from a clone of your own.`,
			{
				details: lastLines(output)
			}
		);
	}
	throw new SetupError('npm could not install the packages; check the way to its registry and start again.', {
		details: lastLines(output)
	});
}

/**
 * @typedef {{ packages?: Partial<Record<string, { version?: string, integrity?: string, optional?: boolean, extraneous?: boolean }>> }} Lock
 */

/**
 * Whether what npm last installed is what the lock file lists.
 *
 * npm writes its record (`node_modules/.package-lock.json`) as the last act of an install, so a broken-off one has none; an
 * install without development packages lacks them. Packages for other platforms are optional and may be absent, and so may what
 * the lock file itself calls extraneous.
 *
 * @param {Lock | null} wanted     package-lock.json
 * @param {Lock | null} installed  node_modules/.package-lock.json
 * @returns {boolean}
 */
export function packagesMatch(wanted, installed) {
	if (!wanted?.packages || !installed?.packages) return false;
	for (const [name, entry] of Object.entries(wanted.packages)) {
		if (name === '' || !entry || entry.extraneous) continue;
		const present = installed.packages[name];
		if (!present) {
			if (entry.optional) continue;
			return false;
		}
		if (present.version !== entry.version || present.integrity !== entry.integrity) return false;
	}
	return true;
}

/** @param {string} path */
function readJson(path) {
	try {
		return JSON.parse(readFileSync(path, 'utf8'));
	} catch {
		return null;
	}
}
