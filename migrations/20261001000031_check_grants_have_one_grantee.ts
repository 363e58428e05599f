import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		ALTER TABLE grants ADD CONSTRAINT IF NOT EXISTS grants_one_grantee CHECK ((grantee_person_id IS NULL) <> (grantee_organisation_id IS NULL))
	`);
}
