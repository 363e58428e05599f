import type { Knex } from 'knex';

/** Metrics that further causes stand on; a lap that was read before has none of them. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		ALTER TABLE lap_corner_metrics
			ADD COLUMN IF NOT EXISTS coast_before_s DOUBLE NULL,
			ADD COLUMN IF NOT EXISTS coast_between_s DOUBLE NULL,
			ADD COLUMN IF NOT EXISTS coast_after_s DOUBLE NULL,
			ADD COLUMN IF NOT EXISTS hold_pct DOUBLE NULL,
			ADD COLUMN IF NOT EXISTS braked_mps2 DOUBLE NULL,
			ADD COLUMN IF NOT EXISTS spin_s DOUBLE NULL,
			ADD COLUMN IF NOT EXISTS steer_corrections SMALLINT UNSIGNED NULL,
			ADD COLUMN IF NOT EXISTS rear_locks SMALLINT UNSIGNED NULL,
			ADD COLUMN IF NOT EXISTS lock_wheels VARCHAR(11) CHARACTER SET ascii COLLATE ascii_bin NULL
	`);
}
