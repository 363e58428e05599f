import type { Knex } from 'knex';

/** From when laps are scored, apart from when the row was written: a focus may be entered after it was agreed. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		ALTER TABLE focus_points
			ADD COLUMN IF NOT EXISTS set_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3)
	`);
}
