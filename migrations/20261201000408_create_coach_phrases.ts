import type { Knex } from 'knex';

/** A coach's own words for a finding, put into drafts; without a code, how a debrief opens. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS coach_phrases (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			person_id BIGINT UNSIGNED NOT NULL,
			finding_code VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin NULL,
			body TEXT NOT NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			UNIQUE KEY coach_phrases_public_id (public_id),
			KEY coach_phrases_person (person_id, finding_code),
			CONSTRAINT coach_phrases_person_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
