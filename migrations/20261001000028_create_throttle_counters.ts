import type { Knex } from 'knex';

/** Shared by all nodes; the column names and their order are those of the rate limiter. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS throttle_counters (
			\`key\` VARCHAR(255) CHARACTER SET ascii COLLATE ascii_bin NOT NULL PRIMARY KEY,
			points INT NOT NULL DEFAULT 0,
			expire BIGINT UNSIGNED NULL,
			KEY throttle_counters_expire (expire)
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
