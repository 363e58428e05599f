import type { Knex } from 'knex';

/** Runs the site (jobs, mail log). Not a role in an organisation, and no key to anybody's laps. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS site_operators (
			person_id BIGINT UNSIGNED NOT NULL PRIMARY KEY,
			since DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			CONSTRAINT site_operators_person_id_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
