import type { Knex } from 'knex';

/** Held by a row for longer than a transaction and by any node; a lock whose holder no longer says that it lives runs out. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS locks (
			name VARCHAR(120) CHARACTER SET ascii COLLATE ascii_bin NOT NULL PRIMARY KEY,
			holder VARCHAR(60) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
			expires_at DATETIME(3) NOT NULL,
			release_asked BOOLEAN NOT NULL DEFAULT FALSE,
			KEY locks_expiry (expires_at)
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
