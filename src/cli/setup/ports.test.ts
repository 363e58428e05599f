import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createServer, type AddressInfo, type Server } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { candidatePort, choosePort, parsePort, portIsFree, waitForPort } from './ports.mjs';

let folder: string;
let file: string;
const open: Server[] = [];

beforeEach(() => {
	folder = mkdtempSync(join(tmpdir(), 'kerbnote-ports-'));
	file = join(folder, 'ports.json');
});

afterEach(async () => {
	for (const server of open.splice(0)) await new Promise((done) => server.close(done));
	rmSync(folder, { recursive: true });
});

describe('candidatePort', () => {
	it('stays below the range of outgoing connections', () => {
		for (let index = 0; index < 2000; index++) {
			const port = candidatePort(`/home/ann/checkout-${index}`, 'server', index);
			expect(port).toBeGreaterThanOrEqual(20000);
			expect(port).toBeLessThan(32000);
		}
	});

	it('is the same for the same checkout and differs between checkouts and uses', () => {
		const first = candidatePort('/home/ann/kerbnote', 'server');
		expect(candidatePort('/home/ann/kerbnote', 'server')).toBe(first);
		expect(candidatePort('/home/ann/kerbnote-2', 'server')).not.toBe(first);
		expect(candidatePort('/home/ann/kerbnote', 'database')).not.toBe(first);
		expect(candidatePort('/home/ann/kerbnote', 'server', 1)).not.toBe(first);
	});
});

describe('parsePort', () => {
	it.each([
		{ text: undefined, expected: null },
		{ text: '', expected: null },
		{ text: '8080', expected: 8080 },
		{ text: '65535', expected: 65535 }
	])('reads $text as $expected', ({ text, expected }) => {
		expect(parsePort(text, 'KERBNOTE_PORT')).toBe(expected);
	});

	it.each(['0', '65536', '80.5', '-1', 'http', ' '])('refuses "%s" by its variable', (text) => {
		expect(() => parsePort(text, 'KERBNOTE_PORT')).toThrow(
			`KERBNOTE_PORT must be a port number from 1 to 65535, got "${text}".`
		);
	});
});

describe('choosePort', () => {
	const wish = { root: '/home/ann/kerbnote', use: 'server', given: null, variable: 'KERBNOTE_PORT' };

	it('remembers what it chose, beside what was remembered for other uses', async () => {
		writeFileSync(file, '{"database":23456}');
		const port = await choosePort({ ...wish, root: folder, file });
		expect(JSON.parse(readFileSync(file, 'utf8'))).toEqual({ database: 23456, server: port });
		expect(await choosePort({ ...wish, root: 'another', file })).toBe(port);
	});

	it('goes past a first choice that is taken', async () => {
		const first = await choosePort({ ...wish, root: folder, file: join(folder, 'other.json') });
		await listenOn(first);
		expect(await choosePort({ ...wish, root: folder, file })).not.toBe(first);
	});

	it('refuses a remembered port that is taken, because people know the address', async () => {
		const taken = await listenOn(0);
		writeFileSync(file, JSON.stringify({ server: taken }));
		await expect(choosePort({ ...wish, file })).rejects.toThrow(
			`Port ${taken} is in use by another program; stop that or choose another port with KERBNOTE_PORT.`
		);
	});

	it('replaces a remembered port that is taken where nobody knows it', async () => {
		const taken = await listenOn(0);
		writeFileSync(file, JSON.stringify({ server: taken }));
		expect(await choosePort({ ...wish, root: folder, file, movable: true })).not.toBe(taken);
	});

	it('never replaces a port that a person gave', async () => {
		const given = await listenOn(0);
		await expect(choosePort({ ...wish, file, given, movable: true })).rejects.toThrow(`Port ${given} is in use`);
	});

	it('begins anew where the file is torn', async () => {
		writeFileSync(file, '{"server":2');
		const port = await choosePort({ ...wish, root: folder, file });
		expect(JSON.parse(readFileSync(file, 'utf8'))).toEqual({ server: port });
	});
});

describe('portIsFree', () => {
	it('says which error stands in the way', async () => {
		expect(await portIsFree(await listenOn(0))).toBe('EADDRINUSE');
	});
});

describe('waitForPort', () => {
	it('gives up as soon as the process behind it has gone', async () => {
		const begun = Date.now();
		expect(await waitForPort(1, { patienceS: 60, alive: () => false })).toBe(false);
		expect(Date.now() - begun).toBeLessThan(5000);
	});

	it('waits for a greeting where one is due', async () => {
		const silent = await listenOn(0);
		expect(await waitForPort(silent, { patienceS: 1, alive: () => true })).toBe(true);
		expect(await waitForPort(silent, { patienceS: 0.2, alive: () => true, greeting: true })).toBe(false);
		const greeting = await listenOn(0, 'hello');
		expect(await waitForPort(greeting, { patienceS: 5, alive: () => true, greeting: true })).toBe(true);
	});
});

async function listenOn(port: number, greeting?: string): Promise<number> {
	const server = createServer((socket) => {
		socket.on('error', () => {});
		if (greeting) socket.end(greeting);
		else setTimeout(() => socket.destroy(), 300);
	});
	open.push(server);
	await new Promise<void>((done) => server.listen(port, '127.0.0.1', done));
	return (server.address() as AddressInfo).port;
}
