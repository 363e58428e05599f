import type { Knex } from 'knex';

/** Which kinds of letters a person chose to get or not to get; without a row the kind's own rule holds. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS mail_choices (
			person_id BIGINT UNSIGNED NOT NULL,
			kind VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
			is_wanted BOOLEAN NOT NULL,
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			PRIMARY KEY (person_id, kind),
			CONSTRAINT mail_choices_person_id_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
