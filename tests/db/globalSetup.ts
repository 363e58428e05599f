import knex from 'knex';
import type { TestProject } from 'vitest/node';
import { startTestMariadb } from '../../src/cli/setup/testMariadb.mjs';
import { databaseConfig } from '../../src/lib/server/db/database.ts';
import { migrateToLatest } from '../../src/lib/server/db/migrateToLatest.ts';

declare module 'vitest' {
	interface ProvidedContext {
		/** mysql://… of a database made for this test run, migrated from empty; tests read it with `inject('databaseUrl')`. */
		databaseUrl: string;
	}
}

const PREFIX = 'kerbnote_test_';

/**
 * Gives the test run a database of its own on a real MariaDB: the one that `KERBNOTE_TEST_DATABASE_URL` names, or the
 * checkout's own, which is started where it does not run. `DATABASE_URL` is left alone on purpose: it may be somebody's data.
 */
export default async function setUpDatabase(project: TestProject): Promise<() => Promise<void>> {
	const given = process.env.KERBNOTE_TEST_DATABASE_URL;
	const server = given ? null : await startTestMariadb(() => {});
	const serverUrl = given ?? server?.url ?? '';
	const name = `${PREFIX}${process.pid}_${Date.now().toString(36)}`;
	const admin = knex({ client: 'mysql2', connection: serverUrl, pool: { min: 0, max: 1 } });
	await dropLeftovers(admin);
	await admin.raw('CREATE DATABASE ?? CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci', [name]);

	const databaseUrl = Object.assign(new URL(serverUrl), { pathname: `/${name}` }).href;
	const migrator = knex(databaseConfig(databaseUrl, 2));
	try {
		await migrateToLatest(migrator);
	} finally {
		await migrator.destroy();
	}
	project.provide('databaseUrl', databaseUrl);

	return async () => {
		await admin.raw('DROP DATABASE IF EXISTS ??', [name]);
		await admin.destroy();
		await server?.stop();
	};
}

/** Drops the databases of test runs that were killed: their process is gone, nobody else will. */
async function dropLeftovers(admin: knex.Knex): Promise<void> {
	const rows = await admin('information_schema.schemata')
		.where('schema_name', 'like', `${PREFIX.replaceAll('_', '\\_')}%`)
		.select<Array<{ name: string }>>({ name: 'schema_name' });
	for (const { name } of rows) {
		const pid = Number(/^kerbnote_test_(\d+)_/.exec(name)?.[1]);
		if (!lives(pid)) await admin.raw('DROP DATABASE IF EXISTS ??', [name]);
	}
}

function lives(pid: number): boolean {
	try {
		process.kill(pid, 0);
		return true;
	} catch {
		return false;
	}
}
