import type { Knex } from 'knex';

/** One row for each role of a person in an organisation; a row that ended stays as history. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS memberships (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			organisation_id BIGINT UNSIGNED NOT NULL,
			person_id BIGINT UNSIGNED NOT NULL,
			role ENUM('driver','coach','manager','admin') NOT NULL,
			since DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			ended_at DATETIME(3) NULL,
			UNIQUE KEY memberships_role (organisation_id, person_id, role),
			KEY memberships_person (person_id, ended_at),
			CONSTRAINT memberships_organisation_id_fk FOREIGN KEY (organisation_id) REFERENCES organisations (id) ON DELETE CASCADE,
			CONSTRAINT memberships_person_id_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
