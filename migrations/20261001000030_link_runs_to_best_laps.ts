import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		ALTER TABLE runs ADD CONSTRAINT runs_best_lap_id_fk FOREIGN KEY IF NOT EXISTS (best_lap_id) REFERENCES laps (id) ON DELETE SET NULL
	`);
}
