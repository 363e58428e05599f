import { createHash } from 'node:crypto';
import { connect, createServer } from 'node:net';
import { readFileSync } from 'node:fs';
import { SetupError } from './SetupError.mjs';
import { writeWhole } from './writeWhole.mjs';

/** Below Linux's range for outgoing connections (32768 and up), so that no passing connection sits on a chosen port. */
const FIRST_PORT = 20000;
const PORT_COUNT = 12000;

/**
 * The port that a checkout tries first: spread by its path, so that two checkouts side by side do not meet.
 *
 * @param {string} root  the checkout
 * @param {string} use   what the port is for
 * @param {number} attempt  0 for the first choice, then 1, 2, …
 * @returns {number} 20000–31999
 */
export function candidatePort(root, use, attempt = 0) {
	const spread = createHash('sha256').update(`${root}\n${use}`).digest().readUInt32BE(0);
	return FIRST_PORT + ((spread + attempt * 7) % PORT_COUNT);
}

/**
 * Reads a port that a person gave.
 *
 * @param {string | undefined} text
 * @param {string} name  the variable's name, for the message
 * @returns {number | null} null where none was given
 * @throws {SetupError} where it is not a whole number from 1 to 65535
 */
export function parsePort(text, name) {
	if (text === undefined || text === '') return null;
	const port = Number(text);
	if (Number.isInteger(port) && port >= 1 && port <= 65535) return port;
	throw new SetupError(`${name} must be a port number from 1 to 65535, got "${text}".`);
}

/**
 * Whether nothing listens on a port of this machine and this account may listen there.
 *
 * @param {number} port
 * @param {string} [host]
 * @returns {Promise<true | string>} true, or the error's code (EADDRINUSE, EACCES)
 */
export function portIsFree(port, host = '127.0.0.1') {
	return new Promise((done) => {
		const probe = createServer();
		probe.once('error', (error) => done('code' in error ? String(error.code) : 'EADDRINUSE'));
		probe.listen({ port, host, exclusive: true }, () => probe.close(() => done(true)));
	});
}

/**
 * Chooses a port and remembers it in a file, so that an address that somebody wrote down stays good.
 *
 * @param {object} wish
 * @param {string} wish.root
 * @param {string} wish.use       "server" or "database"
 * @param {string} wish.file      where it is remembered (JSON)
 * @param {number | null} wish.given   by the person; used or refused, never replaced
 * @param {string} wish.variable  the variable that sets it, for the message
 * @param {string} [wish.host]
 * @param {boolean} [wish.movable]  whether a remembered port that is busy may be replaced: yes where nobody knows it by heart
 * @returns {Promise<number>}
 * @throws {SetupError} where the port is in use or not allowed
 */
export async function choosePort({ root, use, file, given, variable, host, movable = false }) {
	const remembered = readPort(file, use);
	const wished = given ?? remembered;
	if (wished !== null) {
		const free = await portIsFree(wished, host);
		if (free === true) return wished;
		if (free === 'EACCES')
			throw new SetupError(`This account may not listen on port ${wished}; choose one above 1023 with ${variable}.`);
		if (free === 'EADDRNOTAVAIL' || free === 'ENOTFOUND')
			throw new SetupError(`This machine has no address ${host}; check HOST.`);
		if (given !== null || !movable) {
			throw new SetupError(
				`Port ${wished} is in use by another program; stop that or choose another port with ${variable}.`
			);
		}
	}
	for (let attempt = 0; attempt < 200; attempt++) {
		const port = candidatePort(root, use, attempt);
		if ((await portIsFree(port, host)) === true) {
			rememberPort(file, use, port);
			return port;
		}
	}
	throw new SetupError(`No free port was found near ${candidatePort(root, use)}; choose one with ${variable}.`);
}

/**
 * Waits until a port is served; MariaDB greets first, so `greeting` waits for its first byte.
 *
 * @param {number} port
 * @param {{ patienceS: number, alive: () => boolean, greeting?: boolean }} options
 * @returns {Promise<boolean>} false where it never answered, or its process ended
 */
export async function waitForPort(port, { patienceS, alive, greeting = false }) {
	const end = Date.now() + patienceS * 1000;
	while (Date.now() < end) {
		if (await answers(port, greeting)) return true;
		if (!alive()) return false;
		await new Promise((next) => setTimeout(next, 15));
	}
	return false;
}

/**
 * @param {number} port
 * @param {boolean} greeting
 * @returns {Promise<boolean>}
 */
function answers(port, greeting) {
	return new Promise((done) => {
		const socket = connect({ port, host: '127.0.0.1' });
		/** @param {boolean} result */
		const finish = (result) => {
			socket.destroy();
			done(result);
		};
		socket.setTimeout(2000, () => finish(false));
		socket.once('error', () => finish(false));
		socket.once('close', () => finish(false));
		if (greeting) socket.once('data', () => finish(true));
		else socket.once('connect', () => finish(true));
	});
}

/**
 * @param {string} file
 * @param {string} use
 * @returns {number | null}
 */
function readPort(file, use) {
	try {
		const port = JSON.parse(readFileSync(file, 'utf8'))[use];
		return Number.isInteger(port) ? port : null;
	} catch {
		return null;
	}
}

/**
 * @param {string} file
 * @param {string} use
 * @param {number} port
 */
function rememberPort(file, use, port) {
	let ports = {};
	try {
		ports = JSON.parse(readFileSync(file, 'utf8'));
	} catch {
		// Not there yet, or torn: it is written anew.
	}
	writeWhole(file, JSON.stringify({ ...ports, [use]: port }) + '\n');
}
