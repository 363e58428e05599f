import { readFileSync, rmSync } from 'node:fs';
import { join, relative } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { SetupError } from './SetupError.mjs';
import { ROOT, foldersOf } from './checkout.mjs';
import { migrateAndSeed, programArguments } from './commands.mjs';
import { checkRoom } from './diskSpace.mjs';
import { accountsFile, checkReachable, databaseAddress, productEnvironment } from './environment.mjs';
import { holderOf, tryLock } from './fileLock.mjs';
import { startMariadb } from './mariadb.mjs';
import { choosePort, parsePort } from './ports.mjs';
import { installAndBuild, together } from './prepare.mjs';
import { run } from './processes.mjs';
import { report } from './report.mjs';
import { startService, waitForHealth } from './services.mjs';
import { StopRequested, listenForStop } from './stopRequest.mjs';
import { welcomeText } from './welcome.mjs';
import { writeWhole } from './writeWhole.mjs';

const folders = foldersOf('product');
const portFile = join(folders.base, 'ports.json');
/** Says to a second start where the first one serves. */
const addressFile = join(folders.base, 'address');

/** @typedef {(line: string) => void} Say */

/** @type {Say} */
const say = (line) => console.log(line);

/** A command's own output must stand alone on standard output. @type {Say} */
const sayAside = (line) => console.error(line);

/** @typedef {import('./commands.mjs').Way} Way */

/**
 * `npm start`: everything from a fresh clone to a served page, then watches until it is asked to stop.
 * `npm run dev`: the same from the sources, with pages that follow each change.
 * `npm run worker`: the same preparation, then one more worker on the same database, on this machine or another.
 * `npm run admin -- …`: the same preparation, then one command instead of the server.
 *
 * @param {string[]} args  [], ['dev'], ['worker'] or ['admin', …]
 * @returns {Promise<number>} exit code: 0 after a requested stop, 1 after a failure
 */
export async function main(args) {
	const stop = listenForStop();
	/** What has to be ended, last begun first. @type {Array<() => unknown>} */
	const closing = [];
	try {
		const [command, ...rest] = args;
		if (command === 'admin') return await runAdmin(rest, closing);
		if (rest.length === 0 && command === 'worker') return await runWorker(stop, closing);
		if (rest.length === 0 && command === undefined) return await serve('built', stop, closing);
		if (rest.length === 0 && command === 'dev') return await serve('source', stop, closing);
		throw new SetupError(
			`npm start takes no arguments, got "${args.join(' ')}"; its settings are environment variables (README.md).`
		);
	} catch (error) {
		if (error instanceof StopRequested || stop.requested()) return 0;
		report(error);
		return 1;
	} finally {
		for (const close of closing.reverse()) await close();
		if (stop.requested()) say('Stopped.');
	}
}

/**
 * @param {Way} way
 * @param {import('./stopRequest.mjs').StopWatch} stop
 * @param {Array<() => unknown>} closing
 * @returns {Promise<number>}
 */
async function serve(way, stop, closing) {
	checkRoom(ROOT, folders);
	const release = tryLock(join(folders.base, 'start.lock'));
	if (!release) throw alreadyRunning();
	closing.push(release);

	const given = parsePort(process.env.KERBNOTE_PORT || process.env.PORT, 'KERBNOTE_PORT');
	const host = process.env.HOST || '127.0.0.1';
	const port = await choosePort({ root: ROOT, use: 'server', file: portFile, given, variable: 'KERBNOTE_PORT', host });
	const { database, demo } = await prepare({ way, closing, say, check: stop.check });
	const developing = way === 'source';
	const env = productEnvironment({ folders, databaseUrl: database.url, demo, port, developing });
	writeWhole(addressFile, `${env.ORIGIN}\n`);
	closing.push(() => rmSync(addressFile, { force: true }));
	await migrateAndSeed({ env, demo, way, build: folders.build, database: databaseName(), say });
	stop.check();

	/** @param {string} name @param {string[]} args */
	const service = (name, args) => {
		const logFile = developing ? null : join(folders.logs, `${name}.log`);
		const started = startService({ name, args, cwd: ROOT, env, logFile });
		closing.push(started.stop);
		return started;
	};
	const vite = [
		join(ROOT, 'node_modules/vite/bin/vite.js'),
		'dev',
		'--port',
		`${port}`,
		'--host',
		host,
		'--strictPort'
	];
	const server = service('server', developing ? vite : [join(folders.build, 'index.js')]);
	const worker = service('worker', programArguments('worker', way, folders.build));

	const alive = () => server.alive() && !stop.requested();
	const healthy = await waitForHealth(`http://${reachable(host)}:${port}/health/live`, { alive });
	stop.check();
	if (!healthy) {
		throw new SetupError(
			`The server did not come up; its log is ${relative(ROOT, join(folders.logs, 'server.log'))}.`,
			{
				details: server.lastWords()
			}
		);
	}
	say(welcomeText(env.ORIGIN ?? '', demo ? accountsFile(folders) : null));
	return watch([server, worker, database], stop);
}

/**
 * @param {string} host  where the server listens
 * @returns {string} where it can be asked: listening everywhere is no address
 */
function reachable(host) {
	if (host === '0.0.0.0' || host === '::') return '127.0.0.1';
	return host.includes(':') ? `[${host}]` : host;
}

/**
 * Waits until somebody asks to stop.
 *
 * @param {Array<{ name: string, alive: () => boolean, lastWords: () => string }>} parts
 * @param {import('./stopRequest.mjs').StopWatch} stop
 * @returns {Promise<number>}
 * @throws {SetupError} where a part has ended by itself: the rest would only seem to work
 */
async function watch(parts, stop) {
	while (!stop.requested()) {
		const dead = parts.find((part) => !part.alive());
		if (dead) {
			const logs = relative(ROOT, dead.name === 'database' ? folders.database : folders.logs);
			throw new SetupError(`The ${dead.name} has ended by itself, so the rest was stopped; its log is in ${logs}.`, {
				details: dead.lastWords()
			});
		}
		await sleep(100);
	}
	return 0;
}

/**
 * Packages, build and database: what the server and the commands both need.
 *
 * @param {{ way: Way, closing: Array<() => unknown>, say: Say, check?: () => void }} wish
 */
async function prepare({ way, closing, say, check }) {
	const external = process.env.DATABASE_URL;
	if (external) await checkReachable(external);
	const startDatabase = async () => {
		if (external) return { name: 'database', url: external, alive: () => true, lastWords: () => '' };
		const { database: folder, programs } = folders;
		const mariadb = await startMariadb({ root: ROOT, folder, programs, portFile, durable: true, say });
		closing.push(mariadb.stop);
		return { name: 'database', ...mariadb };
	};
	const build = way === 'built' ? folders.build : undefined;
	const [database] = await together([startDatabase(), installAndBuild({ root: ROOT, build, say, check })]);
	check?.();
	return { database, demo: external ? process.env.KERBNOTE_DEMO === '1' : process.env.KERBNOTE_DEMO !== '0' };
}

/**
 * @param {import('./stopRequest.mjs').StopWatch} stop
 * @param {Array<() => unknown>} closing
 * @returns {Promise<number>}
 */
async function runWorker(stop, closing) {
	checkRoom(ROOT, folders);
	const { database } = await prepare({ way: 'built', closing, say, check: stop.check });
	const { build } = folders;
	const env = productEnvironment({ folders, databaseUrl: database.url, demo: false });
	await migrateAndSeed({ env, demo: false, way: 'built', build, database: databaseName(), say });
	stop.check();
	const logFile = join(folders.logs, `worker-${process.pid}.log`);
	const args = programArguments('worker', 'built', build);
	const worker = startService({ name: 'worker', args, cwd: ROOT, env, logFile });
	closing.push(worker.stop);
	say(`A worker runs; its log is ${relative(ROOT, logFile)}.`);
	return watch([worker, database], stop);
}

/**
 * @param {string[]} args
 * @param {Array<() => unknown>} closing
 * @returns {Promise<number>}
 */
async function runAdmin(args, closing) {
	checkRoom(ROOT, folders);
	const { database } = await prepare({ way: 'built', closing, say: sayAside });
	const env = productEnvironment({ folders, databaseUrl: database.url, demo: false });
	const { build } = folders;
	await migrateAndSeed({ env, demo: false, way: 'built', build, database: databaseName(), say: sayAside });
	const command = [...programArguments('admin', 'built', build), ...args];
	const { code } = await run(process.execPath, command, { cwd: ROOT, env, inherit: true });
	return code === 0 ? 0 : 1;
}

function databaseName() {
	const external = process.env.DATABASE_URL;
	return external ? `The database ${databaseAddress(external)} of DATABASE_URL` : 'The database';
}

function alreadyRunning() {
	const pid = holderOf(join(folders.base, 'start.lock'));
	let where = '';
	try {
		where = ` at ${readFileSync(addressFile, 'utf8').trim()}`;
	} catch {
		// It has not come so far yet.
	}
	return new SetupError(
		`Kerbnote already runs from this folder${where} (process ${pid}); stop it before you start another.`
	);
}
