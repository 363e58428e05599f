import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		ALTER TABLE grants ADD CONSTRAINT IF NOT EXISTS grants_scope CHECK (
			(circuit_id IS NOT NULL) = (scope = 'circuit') AND
			(event_id IS NOT NULL) = (scope = 'event') AND
			(run_id IS NOT NULL) = (scope = 'run')
		)
	`);
}
