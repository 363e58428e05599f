import { readFileSync } from 'node:fs';
import { join, relative } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { ROOT, foldersOf } from './checkout.mjs';
import { builtCommand, runBuilt } from './commands.mjs';
import { checkRoom } from './diskSpace.mjs';
import { accountsFile, databaseAddress, productEnvironment } from './environment.mjs';
import { holderOf, tryLock } from './fileLock.mjs';
import { startMariadb } from './mariadb.mjs';
import { choosePort, parsePort } from './ports.mjs';
import { installAndBuild, together } from './prepare.mjs';
import { run } from './processes.mjs';
import { report } from './report.mjs';
import { SetupError } from './SetupError.mjs';
import { startService, waitForHealth } from './services.mjs';
import { StopRequested, listenForStop } from './stopRequest.mjs';

const folders = foldersOf('product');
const portFile = join(folders.base, 'ports.json');

/** @param {string} line */
const say = (line) => console.log(line);

/**
 * `npm start`: everything from a fresh clone to a served page, then watches until it is asked to stop.
 * `npm run admin -- …`: the same preparation, then one command instead of the server.
 *
 * @param {string[]} args  [] or ['admin', …]
 * @returns {Promise<number>} exit code: 0 after a requested stop, 1 after a failure
 */
export async function main(args) {
	const stop = listenForStop();
	/** What has to be ended, last begun first. @type {Array<() => unknown>} */
	const closing = [];
	try {
		if (args[0] === 'admin') return await runAdmin(args.slice(1), closing);
		if (args.length > 0)
			throw new SetupError(
				`npm start takes no arguments, got "${args.join(' ')}"; settings are environment variables (README.md).`
			);
		return await serve(stop, closing);
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
 * @param {import('./stopRequest.mjs').StopWatch} stop
 * @param {Array<() => unknown>} closing
 * @returns {Promise<number>}
 */
async function serve(stop, closing) {
	checkRoom(ROOT, folders);
	const release = tryLock(join(folders.base, 'start.lock'));
	if (!release) throw alreadyRunning();
	closing.push(release);

	const given = parsePort(process.env.KERBNOTE_PORT || process.env.PORT, 'KERBNOTE_PORT');
	const host = process.env.HOST || '127.0.0.1';
	const port = await choosePort({ root: ROOT, use: 'server', file: portFile, given, variable: 'KERBNOTE_PORT', host });
	const { database, demo } = await prepare(closing, stop.check);
	const env = productEnvironment({ folders, databaseUrl: database.url, demo, port });
	stop.check();

	/** @param {string} name @param {string} script */
	const service = (name, script) => {
		const started = startService({ name, script, cwd: ROOT, env, logFile: join(folders.logs, `${name}.log`) });
		closing.push(started.stop);
		return started;
	};
	await migrateAndSeed(env, demo);
	stop.check();
	const server = service('server', join(folders.build, 'index.js'));
	const worker = service('worker', builtCommand(env, 'worker'));
	const watched = [server, worker, database];
	const healthHost = ['0.0.0.0', '::'].includes(host) ? '127.0.0.1' : host.includes(':') ? `[${host}]` : host;
	const healthy = await waitForHealth(`http://${healthHost}:${port}/health/live`, {
		alive: () => server.alive() && !stop.requested()
	});
	stop.check();
	if (!healthy) {
		throw new SetupError(
			`The server did not come up; its log is ${relative(ROOT, join(folders.logs, 'server.log'))}.`,
			{ details: server.lastWords() }
		);
	}
	welcome(env.ORIGIN ?? '', demo);
	return watch(watched, stop);
}

/**
 * @param {Array<{ name: string, alive: () => boolean, lastWords: () => string }>} watched
 * @param {import('./stopRequest.mjs').StopWatch} stop
 * @returns {Promise<number>}
 */
async function watch(watched, stop) {
	for (;;) {
		if (stop.requested()) return 0;
		const dead = watched.find((part) => !part.alive());
		if (dead) {
			throw new SetupError(
				`The ${dead.name} has ended by itself, so everything is stopped; its log is in ${relative(ROOT, folders.base)}.`,
				{
					details: dead.lastWords()
				}
			);
		}
		await sleep(100);
	}
}

/**
 * Packages, build and database: what the server and the commands both need.
 *
 * @param {Array<() => unknown>} closing
 * @param {() => void} [check]
 */
async function prepare(closing, check) {
	const external = process.env.DATABASE_URL;
	if (external) databaseAddress(external);
	const startDatabase = async () => {
		if (external) return { name: 'database', url: external, alive: () => true, lastWords: () => '' };
		const mariadb = await startMariadb({
			root: ROOT,
			folder: folders.database,
			programs: folders.programs,
			portFile,
			durable: true,
			say
		});
		closing.push(mariadb.stop);
		return { name: 'database', ...mariadb };
	};
	const [database] = await together([
		startDatabase(),
		installAndBuild({ root: ROOT, build: folders.build, say, check })
	]);
	const demo = external ? process.env.KERBNOTE_DEMO === '1' : process.env.KERBNOTE_DEMO !== '0';
	return { database, demo };
}

/**
 * @param {NodeJS.ProcessEnv} env
 * @param {boolean} demo
 */
async function migrateAndSeed(env, demo) {
	const where = process.env.DATABASE_URL
		? `The database ${databaseAddress(process.env.DATABASE_URL)} (DATABASE_URL)`
		: 'The database';
	await runBuilt({ name: 'migrate', failure: `${where} could not be brought up to date.`, root: ROOT, env });
	if (demo) await runBuilt({ name: 'seed', failure: 'The demo could not be put into the database.', root: ROOT, env });
}

/**
 * @param {string[]} args
 * @param {Array<() => unknown>} closing
 * @returns {Promise<number>}
 */
async function runAdmin(args, closing) {
	checkRoom(ROOT, folders);
	const { database, demo } = await prepare(closing);
	const env = productEnvironment({ folders, databaseUrl: database.url, demo });
	await migrateAndSeed(env, false);
	const { code } = await run(process.execPath, [builtCommand(env, 'admin'), ...args], {
		cwd: ROOT,
		env,
		inherit: true
	});
	return code === 0 ? 0 : 1;
}

function alreadyRunning() {
	const pid = holderOf(join(folders.base, 'start.lock'));
	let where = '';
	try {
		where = ` at http://localhost:${JSON.parse(readFileSync(portFile, 'utf8')).server}`;
	} catch {
		// It has not chosen a port yet.
	}
	return new SetupError(
		`Kerbnote already runs from this folder${where} (process ${pid}); stop it before you start another.`
	);
}

/**
 * @param {string} address
 * @param {boolean} demo
 */
function welcome(address, demo) {
	say(`\nKerbnote is ready: ${address}`);
	if (demo) {
		/** @type {Array<{ name: string, email: string, password: string, role: string }>} */
		const accounts = JSON.parse(readFileSync(accountsFile(folders), 'utf8'));
		const width = Math.max(...accounts.map((account) => account.email.length));
		say(`\nDemo accounts (kept in ${relative(ROOT, accountsFile(folders))}):`);
		for (const { name, email, password, role } of accounts)
			say(`  ${email.padEnd(width)}  ${password}  ${name}, ${role}`);
	}
	say('\nStop it with Ctrl-C.');
}
