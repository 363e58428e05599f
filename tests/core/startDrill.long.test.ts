import { spawn, spawnSync, type ChildProcess } from 'node:child_process';
import { existsSync, mkdtempSync, readFileSync, readdirSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest';

/** What a person meets at a start, in a clone of its own: from nothing, again, twice at once, and when something dies. */

const STOPS_WITHIN_S = 60;
/** The first start installs and builds; on a busy machine that takes minutes. */
const STARTS_WITHIN_S = 900;
let base: string;
let clone: string;
const begun: Start[] = [];

beforeAll(() => {
	base = mkdtempSync(join(tmpdir(), 'kerbnote-start-'));
	clone = join(base, 'clone');
	const cloned = spawnSync('git', ['clone', '--quiet', '--no-hardlinks', resolve('.'), clone], { encoding: 'utf8' });
	expect(cloned.stderr).toBe('');
});

afterEach(async () => {
	for (const start of begun.splice(0)) await start.stop('SIGTERM');
	expect(processesOf(clone)).toEqual([]);
});

afterAll(() => rmSync(base, { recursive: true, force: true }));

it('comes from a bare clone to a served page, with a way to sign in', async () => {
	const start = npmStart();
	const address = await start.ready();
	const page = await fetch(`${address}/sign-in`);
	expect(page.status).toBe(200);
	expect(start.printed()).toMatch(/Demo accounts/);
	expect(await start.stop('SIGTERM')).toBe(0);
	expect(start.printed()).toMatch(/Stopped\.\n$/);
});

it('starts again within 15 s, at the same address and with the same accounts', async () => {
	const accounts = readFileSync(join(clone, 'var/demo-accounts.json'), 'utf8');
	const first = readFileSync(join(clone, 'var/ports.json'), 'utf8');
	const begunAt = Date.now();
	const start = npmStart();
	await start.ready();
	expect((Date.now() - begunAt) / 1000).toBeLessThan(15);
	expect(readFileSync(join(clone, 'var/ports.json'), 'utf8')).toBe(first);
	expect(readFileSync(join(clone, 'var/demo-accounts.json'), 'utf8')).toBe(accounts);
	expect(await start.stop('SIGINT')).toBe(0);
});

it('tells a second start where the first one serves', async () => {
	const address = await npmStart().ready();
	const second = npmStart();
	expect(await second.ended()).toBe(1);
	expect(second.printed()).toMatch(`Kerbnote already runs from this folder at ${address}`);
});

it('lets one of two starts at once serve, and the other say so', async () => {
	const starts = [npmStart(), npmStart()];
	const outcomes = await Promise.all(starts.map((start) => Promise.race([start.ready(), start.ended()])));
	expect(outcomes.filter((outcome) => outcome === 1)).toHaveLength(1);
	expect(outcomes.filter((outcome) => typeof outcome === 'string')).toHaveLength(1);
});

it('stops the rest where the worker dies, and says which part it was', async () => {
	const start = npmStart();
	await start.ready();
	const worker = processesOf(clone).find(({ command }) => command.includes('worker.js'));
	process.kill(worker?.pid ?? 0, 'SIGKILL');
	expect(await start.ended()).toBe(1);
	expect(start.printed()).toMatch(/The worker has ended by itself, so the rest was stopped; its log is in var\/log\./);
});

it('leaves nothing behind that holds the port when it is killed without a chance to clean up', async () => {
	const killed = npmStart();
	const address = await killed.ready();
	killed.child.kill('SIGKILL');
	const startPid = Number(readFileSync(join(clone, 'var/start.lock'), 'utf8').split(' ')[0]);
	process.kill(startPid, 'SIGKILL');
	await killed.ended();
	expect(await npmStart().ready()).toBe(address);
});

it('says in one sentence that its port is taken', async () => {
	const port = Number(
		new URL(`http://x:${JSON.parse(readFileSync(join(clone, 'var/ports.json'), 'utf8')).server}`).port
	);
	const other = createServer();
	await new Promise<void>((done) => other.listen(port, '127.0.0.1', done));
	try {
		const start = npmStart();
		expect(await start.ended()).toBe(1);
		expect(start.printed()).toBe(
			`Port ${port} is in use by another program; stop that or choose another port with KERBNOTE_PORT.\n`
		);
	} finally {
		await new Promise((done) => other.close(done));
	}
});

it('makes the first person in a database of its own', async () => {
	const made = spawnSync('npm', ['run', '--silent', 'admin', '--', 'create', 'first@kerbnote.example'], {
		cwd: clone,
		env: environment(),
		encoding: 'utf8'
	});
	expect(made.status).toBe(0);
	expect(made.stdout).toMatch(/first@kerbnote\.example/);
});

interface Start {
	child: ChildProcess;
	printed: () => string;
	/** the address, once it is served */
	ready: () => Promise<string>;
	/** the exit code */
	ended: () => Promise<number | null>;
	stop: (signal: NodeJS.Signals) => Promise<number | null>;
}

function npmStart(): Start {
	const child = spawn('npm', ['start', '--silent'], {
		cwd: clone,
		env: environment(),
		stdio: ['ignore', 'pipe', 'pipe']
	});
	let text = '';
	child.stdout.on('data', (piece) => (text += piece));
	child.stderr.on('data', (piece) => (text += piece));
	let code: number | null | undefined;
	child.once('close', (exitCode) => (code = exitCode));
	const until = async <Found>(look: () => Found | undefined, patienceS: number): Promise<Found> => {
		for (const end = Date.now() + patienceS * 1000; Date.now() < end; await sleep(50)) {
			const found = look();
			if (found !== undefined) return found;
		}
		throw new Error(`waited ${patienceS} s in vain; printed so far:\n${text}`);
	};
	const start: Start = {
		child,
		printed: () => text,
		ready: () => until(() => /Kerbnote is ready: (\S+)/.exec(text)?.[1], STARTS_WITHIN_S),
		ended: () => until(() => code, STARTS_WITHIN_S),
		stop: async (signal) => {
			if (code === undefined) child.kill(signal);
			return await until(() => code, STOPS_WITHIN_S);
		}
	};
	begun.push(start);
	return start;
}

/** Without what the test run around has set. */
function environment(): NodeJS.ProcessEnv {
	const { PATH, HOME, LANG } = process.env;
	return { PATH, HOME, LANG };
}

function processesOf(folder: string): Array<{ pid: number; command: string }> {
	return readdirSync('/proc')
		.filter((name) => /^\d+$/.test(name) && existsSync(`/proc/${name}/cmdline`))
		.map((name) => ({ pid: Number(name), command: commandOf(name) }))
		.filter(({ command }) => command.includes(`${folder}/`));
}

function commandOf(pid: string): string {
	try {
		return readFileSync(`/proc/${pid}/cmdline`, 'utf8').replaceAll('\0', ' ');
	} catch {
		return '';
	}
}
