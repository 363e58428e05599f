import '../helpers/server.ts';
import knex, { type Knex } from 'knex';
import { afterAll, afterEach, describe, expect, inject, it } from 'vitest';
import { databaseConfig } from '../../src/lib/server/db/database.ts';
import { migrateToLatest } from '../../src/lib/server/db/migrateToLatest.ts';
import { migrations } from '../../src/lib/server/db/migrations.ts';

const serverUrl = new URL(inject('databaseUrl'));
const admin = knex(databaseConfig(serverUrl.href, 1));
const made: { name: string; db: Knex }[] = [];

/** An empty database of this test's own, and a pool into it. */
async function emptyDatabase(): Promise<{ db: Knex; url: string }> {
	const name = `${serverUrl.pathname.slice(1)}_m${made.length}`;
	await admin.raw('DROP DATABASE IF EXISTS ??', [name]);
	await admin.raw('CREATE DATABASE ?? CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci', [name]);
	const url = Object.assign(new URL(serverUrl), { pathname: `/${name}` }).href;
	const db = knex(databaseConfig(url, 3));
	made.push({ name, db });
	return { db, url };
}

/** Every table, column and key of a schema, as text that can be compared. */
async function describeSchema(db: Knex): Promise<string[]> {
	const [tables] = await db.raw("SHOW FULL TABLES WHERE Table_type = 'BASE TABLE'");
	const names: string[] = tables.map((row: Record<string, string>) => Object.values(row)[0]).sort();
	const texts: string[] = [];
	for (const name of names) {
		const [[row]] = await db.raw('SHOW CREATE TABLE ??', [name]);
		texts.push(String(row['Create Table']).replace(/ AUTO_INCREMENT=\d+/, ''));
	}
	return texts;
}

afterEach(async () => {
	for (const { name, db } of made.splice(0)) {
		await db.destroy();
		await admin.raw('DROP DATABASE IF EXISTS ??', [name]);
	}
});
afterAll(() => admin.destroy());

describe('migrateToLatest', () => {
	it('builds the schema from empty, and changes nothing the second time', async () => {
		const { db } = await emptyDatabase();
		expect(await migrateToLatest(db)).toHaveLength(migrations.length);
		const before = await describeSchema(db);
		expect(await migrateToLatest(db)).toEqual([]);
		expect(await describeSchema(db)).toEqual(before);
	});

	it('makes every step again after a failure that came before it was written down', async () => {
		const { db } = await emptyDatabase();
		await migrateToLatest(db);
		const before = await describeSchema(db);
		await db('knex_migrations').delete();
		expect(await migrateToLatest(db)).toHaveLength(migrations.length);
		expect(await describeSchema(db)).toEqual(before);
	});

	it('goes on where it stopped', async () => {
		const { db } = await emptyDatabase();
		await migrateToLatest(db);
		const before = await describeSchema(db);
		const [last] = await db('knex_migrations').orderBy('id', 'desc').limit(1);
		await db('knex_migrations')
			.where('id', '>', last.id - 5)
			.delete();
		expect(await migrateToLatest(db)).toHaveLength(5);
		expect(await describeSchema(db)).toEqual(before);
	});

	it('takes over from a migrator that died with both locks in its hands', async () => {
		const { db } = await emptyDatabase();
		await migrateToLatest(db);
		await db('knex_migrations').orderBy('id', 'desc').limit(1).delete();
		await db('knex_migrations_lock').update({ is_locked: 1 });
		await db('migrator').update({ owner: 'f'.repeat(32), beat_at: db.raw('CURRENT_TIMESTAMP(3) - INTERVAL 1 MINUTE') });
		expect(await migrateToLatest(db)).toHaveLength(1);
		expect(await db('knex_migrations_lock').first('is_locked')).toEqual({ is_locked: 0 });
	});

	it('waits for a migrator that lives, and gives up on one that never ends', async () => {
		const { db } = await emptyDatabase();
		await migrateToLatest(db);
		await db('migrator').update({ owner: 'f'.repeat(32), beat_at: db.raw('CURRENT_TIMESTAMP(3)') });
		await expect(migrateToLatest(db, 100)).rejects.toThrow('requires the other migrator to end');
		await db('migrator').update({ owner: null });
		expect(await migrateToLatest(db, 100)).toEqual([]);
	});

	it('lets one of several work when all start at once', async () => {
		const { db, url } = await emptyDatabase();
		const others = [knex(databaseConfig(url, 2)), knex(databaseConfig(url, 2))];
		try {
			const steps = await Promise.all([db, ...others].map((pool) => migrateToLatest(pool)));
			expect(steps.flat()).toHaveLength(migrations.length);
		} finally {
			await Promise.all(others.map((pool) => pool.destroy()));
		}
	});
});

describe('the schema', () => {
	const db = admin;

	it('has a primary key on every table, for a cluster copies rows by it', async () => {
		const [rows] = await db.raw(
			`SELECT tables.table_name AS name FROM information_schema.tables
			WHERE tables.table_schema = DATABASE() AND tables.table_type = 'BASE TABLE' AND NOT EXISTS (
				SELECT 1 FROM information_schema.table_constraints AS keys_of
				WHERE keys_of.table_schema = tables.table_schema AND keys_of.table_name = tables.table_name AND keys_of.constraint_type = 'PRIMARY KEY')`
		);
		expect(rows.map(({ name }: { name: string }) => name)).toEqual([]);
	});

	it('is InnoDB, utf8mb4 and in milliseconds throughout', async () => {
		const [engines] = await db.raw(
			"SELECT DISTINCT engine FROM information_schema.tables WHERE table_schema = DATABASE() AND table_type = 'BASE TABLE'"
		);
		expect(engines).toEqual([{ engine: 'InnoDB' }]);
		const [columns] = await db.raw(
			`SELECT table_name, column_name, character_set_name, datetime_precision, data_type FROM information_schema.columns
			WHERE table_schema = DATABASE() AND table_name NOT LIKE 'knex%'
				AND ((character_set_name IS NOT NULL AND character_set_name NOT IN ('utf8mb4', 'ascii'))
					OR (data_type = 'datetime' AND datetime_precision <> 3) OR data_type = 'timestamp')`
		);
		expect(columns).toEqual([]);
	});

	it('keeps two people from one address, however it is written, and one grant from two grantees', async () => {
		const person = (email: string) => ({
			public_id: Buffer.from(email.padEnd(16).slice(0, 16)),
			email,
			name: 'Jonas Velde'
		});
		const [id] = await db('people').insert(person('jonas.keys@example.org'));
		await expect(db('people').insert({ ...person('x'), email: 'jonas.keys@example.org' })).rejects.toMatchObject({
			code: 'ER_DUP_ENTRY'
		});
		const grant = { owner_id: id, public_id: Buffer.alloc(16, 1), scope: 'all' };
		await expect(db('grants').insert(grant)).rejects.toMatchObject({ errno: 4025 });
		await expect(db('grants').insert({ ...grant, grantee_person_id: id, scope: 'run' })).rejects.toMatchObject({
			errno: 4025
		});
	});
});
