import { spawn, type ChildProcess } from 'node:child_process';
import { existsSync, mkdirSync, mkdtempSync, readFileSync, readdirSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { createConnection } from 'mysql2/promise';
import { afterAll, afterEach, beforeAll, beforeEach, expect, it, vi } from 'vitest';
import { z } from 'zod';
import { isAlive } from '../../src/cli/setup/processes.mjs';

// A server starts in a second on a quiet machine and in twenty on one that also builds and tests.
vi.setConfig({ testTimeout: 120_000, hookTimeout: 120_000 });

let base: string;
let folder: string;
const starts: ChildProcess[] = [];

// One data folder for all: making one is the slow part, and every test leaves it stopped.
beforeAll(() => {
	base = mkdtempSync(join(tmpdir(), 'kerbnote-mariadb-'));
});

beforeEach(() => {
	folder = join(base, 'mariadb');
});

afterEach(async () => {
	await Promise.all(starts.splice(0).map((child) => leave(child)));
});

afterAll(() => rmSync(base, { recursive: true, force: true }));

it('lets several starts at once share one server, which the last one to leave ends', async () => {
	const joined = await Promise.all([start(), start(), start()]);
	const pid = serverPid();
	expect(new Set(joined.map(({ url }) => url)).size).toBe(1);
	await Promise.all(joined.slice(1).map(({ child }) => leave(child)));
	expect(isAlive(pid)).toBe(true);
	await leave(joined[0].child);
	expect(isAlive(pid)).toBe(false);
	expect(readdirSync(join(folder, 'users'))).toEqual([]);
});

it('joins the server that a killed start left behind, and ends it in the end', async () => {
	const first = await start();
	const pid = serverPid();
	first.child.kill('SIGKILL');
	const second = await start();
	expect(serverPid()).toBe(pid);
	await leave(second.child);
	expect(isAlive(pid)).toBe(false);
});

it('comes back with its data after the server was killed', async () => {
	const first = await start();
	await query(first.url, 'CREATE TABLE kept (id INT PRIMARY KEY)');
	await query(first.url, 'INSERT INTO kept VALUES (7)');
	process.kill(serverPid(), 'SIGKILL');
	await leave(first.child);
	const second = await start();
	expect(await query(second.url, 'SELECT id FROM kept')).toEqual([{ id: 7 }]);
});

it('keeps its secrets to its owner and lets nobody in without one', async () => {
	const { url } = await start();
	expect(statSync(join(folder, 'secret')).mode & 0o777).toBe(0o600);
	expect(existsSync(join(folder, 'init.sql'))).toBe(false);
	const superuser = Object.assign(new URL(url), { username: 'root', password: '', pathname: '/mysql' }).href;
	await expect(query(superuser, 'SELECT 1')).rejects.toThrow('Access denied');
	const nobody = Object.assign(new URL(url), { username: '', password: '' }).href;
	await expect(query(nobody, 'SELECT 1')).rejects.toThrow('Access denied');
});

it('starts in a folder whose path is too long for a socket', async () => {
	folder = join(base, 'a-checkout-that-somebody-keeps-deep-below-other-folders'.repeat(2), 'mariadb');
	mkdirSync(folder, { recursive: true });
	const { url, child } = await start();
	expect(await query(url, 'SELECT 1 AS one')).toEqual([{ one: 1 }]);
	const socket = z
		.object({ socket: z.string() })
		.parse(JSON.parse(readFileSync(join(folder, 'server.json'), 'utf8'))).socket;
	expect(Buffer.byteLength(socket)).toBeLessThan(108);
	await leave(child);
	expect(existsSync(socket)).toBe(false);
});

/** A start as another process sees it: prints the address, and leaves when its input ends. */
const PROGRAM = `
	const { startMariadb } = await import(process.argv[1]);
	const [folder, base] = process.argv.slice(2);
	const mariadb = await startMariadb({ root: base, folder, programs: base, portFile: base + '/ports.json', durable: true, say: () => {} });
	console.log(mariadb.url);
	process.stdin.resume().on('end', () => mariadb.stop());
`;

async function start(): Promise<{ url: string; child: ChildProcess }> {
	const module = resolve('src/cli/setup/mariadb.mjs');
	const child = spawn(process.execPath, ['--input-type=module', '-e', PROGRAM, module, folder, base], {
		stdio: ['pipe', 'pipe', 'pipe']
	});
	starts.push(child);
	let errors = '';
	child.stderr.on('data', (text) => (errors += text));
	const url = await new Promise<string>((done, fail) => {
		child.stdout.once('data', (text) => done(String(text).trim()));
		child.once('exit', () => fail(new Error(errors)));
	});
	return { url, child };
}

async function leave(child: ChildProcess): Promise<void> {
	child.stdin?.end();
	while (child.exitCode === null && child.signalCode === null) await sleep(10);
}

function serverPid(): number {
	return z.object({ pid: z.number() }).parse(JSON.parse(readFileSync(join(folder, 'server.json'), 'utf8'))).pid;
}

async function query(url: string, sql: string): Promise<unknown> {
	const connection = await createConnection(url);
	try {
		const [rows] = await connection.query(sql);
		return rows;
	} finally {
		await connection.end();
	}
}
