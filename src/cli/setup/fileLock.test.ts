import { spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { holderOf, tryLock, waitForLock } from './fileLock.mjs';

let folder: string;
let path: string;

beforeEach(() => {
	folder = mkdtempSync(join(tmpdir(), 'kerbnote-lock-'));
	path = join(folder, 'below/start.lock');
});

afterEach(() => rmSync(folder, { recursive: true }));

describe('tryLock', () => {
	it('lets one in, names it, and lets the next in when it has gone', () => {
		const release = tryLock(path);
		expect(holderOf(path)).toBe(process.pid);
		expect(tryLock(path)).toBeNull();
		release?.();
		expect(existsSync(path)).toBe(false);
		expect(tryLock(path)).not.toBeNull();
	});

	it('takes over the lock of a process that has ended', () => {
		const { pid } = spawnSync(process.execPath, ['-e', '']);
		takeLock(`${pid} 12345`);
		expect(holderOf(path)).toBeNull();
		expect(tryLock(path)).not.toBeNull();
		expect(holderOf(path)).toBe(process.pid);
	});

	it('takes over where the process id has been given to another process since', () => {
		takeLock(`${process.pid} 1`);
		expect(tryLock(path)).not.toBeNull();
	});

	it('leaves nothing beside the lock', () => {
		tryLock(path);
		tryLock(path);
		expect(readdirSync(join(folder, 'below'))).toEqual(['start.lock']);
	});

	it('does not give back a lock that somebody else took meanwhile', () => {
		const release = tryLock(path);
		writeFileSync(path, '1 1');
		release?.();
		expect(existsSync(path)).toBe(true);
	});

	function takeLock(holder: string): void {
		tryLock(path)?.();
		writeFileSync(path, holder);
	}
});

describe('waitForLock', () => {
	it('says once that it waits, and gets the lock when it is free', async () => {
		const release = tryLock(path);
		let said = 0;
		const waiting = waitForLock(path, { onwait: () => said++ });
		setTimeout(() => release?.(), 150);
		expect(await waiting).not.toBeNull();
		expect(said).toBe(1);
	});

	it('gives up in time', async () => {
		tryLock(path);
		expect(await waitForLock(path, { patienceS: 0.1 })).toBeNull();
	});
});
