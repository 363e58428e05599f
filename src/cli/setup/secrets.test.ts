import { mkdtempSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { secretFrom } from './secrets.mjs';

let folder: string;
beforeEach(() => (folder = mkdtempSync(join(tmpdir(), 'kerbnote-secret-'))));
afterEach(() => rmSync(folder, { recursive: true }));

describe('secretFrom', () => {
	it('makes 256 random bits that only the owner can read, and gives the same ones again', () => {
		const path = join(folder, 'deep/auth-secret');
		const secret = secretFrom(path);
		expect(secret).toMatch(/^[0-9a-f]{64}$/);
		expect(statSync(path).mode & 0o777).toBe(0o600);
		expect(secretFrom(path)).toBe(secret);
		expect(secretFrom(join(folder, 'other'))).not.toBe(secret);
	});

	it('refuses a file that holds something else, and does not repeat it', () => {
		const path = join(folder, 'auth-secret');
		writeFileSync(path, 'hunter2');
		expect(() => secretFrom(path)).toThrow(/should hold one secret of 64 hex digits/);
		expect(() => secretFrom(path)).not.toThrow(/hunter2/);
	});
});
