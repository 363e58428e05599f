import { randomBytes } from 'node:crypto';
import { linkSync, mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { dirname } from 'node:path';
import { SetupError } from './SetupError.mjs';

/**
 * Reads a secret of this installation, or makes one: 256 random bits in hex, in a file that only its owner can read.
 *
 * Two callers at once get the same one: the file is linked into place, and who comes second reads the first one's.
 *
 * @param {string} path
 * @returns {string} 64 hex digits
 * @throws {SetupError} where the file does not hold a secret
 */
export function secretFrom(path) {
	const existing = readSecret(path);
	if (existing !== null) return existing;
	mkdirSync(dirname(path), { recursive: true });
	const draft = `${path}.${process.pid}.draft`;
	writeFileSync(draft, randomBytes(32).toString('hex') + '\n', { mode: 0o600 });
	try {
		linkSync(draft, path);
	} catch (error) {
		if (!(error instanceof Error && 'code' in error && error.code === 'EEXIST')) throw error;
	} finally {
		rmSync(draft, { force: true });
	}
	const made = readSecret(path);
	if (made === null) throw new SetupError(`The secret ${path} could not be written.`);
	return made;
}

/** @param {string} path */
function readSecret(path) {
	let text;
	try {
		text = readFileSync(path, 'utf8').trim();
	} catch (error) {
		if (error instanceof Error && 'code' in error && error.code === 'ENOENT') return null;
		throw error;
	}
	if (!/^[0-9a-f]{64}$/.test(text)) {
		throw new SetupError(
			`The file ${path} should hold one secret of 64 hex digits and does not; restore it from a backup.`
		);
	}
	return text;
}
