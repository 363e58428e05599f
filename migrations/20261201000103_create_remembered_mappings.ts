import type { Knex } from 'knex';

/** What somebody said of the columns of files with one header: for themself, or for their organisation. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS remembered_mappings (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			person_id BIGINT UNSIGNED NULL,
			organisation_id BIGINT UNSIGNED NULL,
			header_key BINARY(32) NOT NULL,
			mapping JSON NOT NULL,
			created_by BIGINT UNSIGNED NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			UNIQUE KEY remembered_mappings_person (person_id, header_key),
			UNIQUE KEY remembered_mappings_organisation (organisation_id, header_key),
			KEY remembered_mappings_created_by (created_by),
			CONSTRAINT remembered_mappings_person_id_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT remembered_mappings_organisation_id_fk FOREIGN KEY (organisation_id) REFERENCES organisations (id) ON DELETE CASCADE,
			CONSTRAINT remembered_mappings_created_by_fk FOREIGN KEY (created_by) REFERENCES people (id) ON DELETE SET NULL,
			CONSTRAINT remembered_mappings_one_owner CHECK ((person_id IS NULL) <> (organisation_id IS NULL))
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
