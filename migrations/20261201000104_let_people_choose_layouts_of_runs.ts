import type { Knex } from 'knex';

/** A layout that a person chose for a run; each further reading of its file keeps to it. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		ALTER TABLE runs
			ADD COLUMN IF NOT EXISTS chosen_layout_id BIGINT UNSIGNED NULL,
			ADD CONSTRAINT runs_chosen_layout_id_fk FOREIGN KEY IF NOT EXISTS (chosen_layout_id) REFERENCES layouts (id) ON DELETE SET NULL
	`);
}
