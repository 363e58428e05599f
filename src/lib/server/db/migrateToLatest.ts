import { randomBytes } from 'node:crypto';
import type { Knex } from 'knex';

/** A migrator says that it lives this often … */
const BEAT_MS = 1_000;
/** … and counts as dead after this long without a word. Several beats, so that a slow step is not taken for death. */
const DEAD_AFTER_MS = 6 * BEAT_MS;
const ASK_AGAIN_MS = 500;

/**
 * Brings the schema to the newest step. Any number of processes may call this at once, on any node: one of them works, the
 * others wait for it. The lock of a migrator that died is taken over.
 *
 * The claim is a row with a beat, not GET_LOCK, which a cluster does not share. Knex's own lock is held inside the claim, so that
 * whoever holds the claim and still finds it taken knows that its holder is gone.
 *
 * @param db pool of at least two connections: one works, one keeps the beat
 * @param waitMs how long to wait for another migrator
 * @returns names of the steps that this call made
 * @throws {Error} if another migrator is still alive and working after `waitMs`
 */
export async function migrateToLatest(db: Knex, waitMs = 120_000): Promise<string[]> {
	await db.raw(`
		CREATE TABLE IF NOT EXISTS migrator (
			id TINYINT UNSIGNED NOT NULL PRIMARY KEY,
			owner CHAR(32) CHARACTER SET ascii COLLATE ascii_bin NULL,
			beat_at DATETIME(3) NOT NULL
		) ENGINE=InnoDB
	`);
	await db.raw('INSERT IGNORE INTO migrator (id, owner, beat_at) VALUES (1, NULL, CURRENT_TIMESTAMP(3))');
	const owner = randomBytes(16).toString('hex');
	const giveUpAt = Date.now() + waitMs;
	while (!(await claim(db, owner))) {
		if (Date.now() > giveUpAt)
			throw new Error(`migrateToLatest requires the other migrator to end within ${waitMs} ms`);
		await new Promise((resolve) => setTimeout(resolve, ASK_AGAIN_MS));
	}
	const beat = setInterval(() => void keepBeat(db, owner), BEAT_MS);
	try {
		return await runSteps(db);
	} finally {
		clearInterval(beat);
		await db('migrator').where({ id: 1, owner }).update({ owner: null });
	}
}

async function claim(db: Knex, owner: string): Promise<boolean> {
	const claimed = await db('migrator')
		.where({ id: 1 })
		.andWhere((free) =>
			free
				.whereNull('owner')
				.orWhereRaw('beat_at < CURRENT_TIMESTAMP(3) - INTERVAL ? MICROSECOND', [DEAD_AFTER_MS * 1000])
		)
		.update({ owner, beat_at: db.raw('CURRENT_TIMESTAMP(3)') });
	return claimed === 1;
}

async function keepBeat(db: Knex, owner: string): Promise<void> {
	try {
		await db('migrator')
			.where({ id: 1, owner })
			.update({ beat_at: db.raw('CURRENT_TIMESTAMP(3)') });
	} catch {
		// The step itself meets the same fault and reports it; a lost beat alone is no reason to stop.
	}
}

async function runSteps(db: Knex): Promise<string[]> {
	try {
		return await latest(db);
	} catch (error) {
		if (!(error instanceof Error && error.name === 'MigrationLocked')) throw error;
		await db.migrate.forceFreeMigrationsLock();
		return await latest(db);
	}
}

async function latest(db: Knex): Promise<string[]> {
	const [, names]: [number, string[]] = await db.migrate.latest();
	return names;
}
