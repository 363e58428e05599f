import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		ALTER TABLE runs ADD CONSTRAINT runs_analysis_id_fk FOREIGN KEY IF NOT EXISTS (analysis_id) REFERENCES analyses (id) ON DELETE SET NULL
	`);
}
