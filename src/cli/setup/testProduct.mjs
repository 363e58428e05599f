import { mkdirSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { ROOT, foldersOf } from './checkout.mjs';
import { migrateAndSeed, programArguments } from './commands.mjs';
import { accountsFile, productEnvironment } from './environment.mjs';
import { choosePort, parsePort } from './ports.mjs';
import { SetupError } from './SetupError.mjs';
import { startService, waitForHealth } from './services.mjs';

/**
 * Serves the built product for the browser's journeys: a fresh database with the demo in it, the server and its worker.
 *
 * @param {string} serverUrl  mysql://… of the tests' MariaDB
 * @returns {Promise<{ env: NodeJS.ProcessEnv, stop: () => Promise<void> }>} `env`: what Playwright needs to find it
 * @throws {SetupError} with the last words of what did not come up
 */
export async function serveForJourneys(serverUrl) {
	const whole = foldersOf('test');
	const base = join(whole.base, 'journeys');
	const folders = { ...whole, base, storage: join(base, 'storage') };
	rmSync(base, { recursive: true, force: true });
	mkdirSync(base, { recursive: true, mode: 0o700 });

	const database = await freshDatabase(serverUrl, `kerbnote_journeys`);
	const port = await choosePort({
		root: `${ROOT} test`,
		use: 'server',
		file: join(whole.base, 'ports.json'),
		given: parsePort(process.env.KERBNOTE_TEST_PORT, 'KERBNOTE_TEST_PORT'),
		variable: 'KERBNOTE_TEST_PORT',
		movable: true
	});
	// The person's own settings are for their product: the journeys run on known ones.
	const known = { ORIGIN: '', HOST: '127.0.0.1', AUTH_SECRET: '', KERBNOTE_STORAGE: '', KERBNOTE_SMTP_URL: '' };
	const given = { ...process.env, ...known };
	const env = productEnvironment({ folders, databaseUrl: database, demo: true, port, given });
	const { build, logs } = folders;
	await migrateAndSeed({
		env,
		demo: true,
		way: 'built',
		build,
		database: 'The empty database of the journeys',
		say: () => {}
	});

	/** @param {string} name @param {string[]} args */
	const service = (name, args) => startService({ name, args, cwd: ROOT, env, logFile: join(logs, `${name}.log`) });
	const server = service('server', [join(build, 'index.js')]);
	const worker = service('worker', programArguments('worker', 'built', build));
	const stop = async () => {
		await Promise.all([server.stop(), worker.stop()]);
	};
	if (!(await waitForHealth(`http://127.0.0.1:${port}/health/live`, { alive: server.alive }))) {
		const details = server.lastWords();
		await stop();
		throw new SetupError('The built server did not come up.', { details });
	}
	return {
		env: { ...process.env, KERBNOTE_BASE_URL: env.ORIGIN, KERBNOTE_DEMO_ACCOUNTS: accountsFile(folders) },
		stop
	};
}

/**
 * @param {string} serverUrl
 * @param {string} name
 * @returns {Promise<string>} its address
 */
async function freshDatabase(serverUrl, name) {
	// From npm, so only loaded once the packages are there.
	const { createConnection } = await import('mysql2/promise');
	const connection = await createConnection(serverUrl);
	try {
		await connection.query(`DROP DATABASE IF EXISTS ${name}`);
		await connection.query(`CREATE DATABASE ${name} CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci`);
	} finally {
		await connection.end();
	}
	return Object.assign(new URL(serverUrl), { pathname: `/${name}` }).href;
}
