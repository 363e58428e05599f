import type { Knex } from 'knex';

/** What a zone note said before each change, and who changed it. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS zone_note_revisions (
			zone_note_id BIGINT UNSIGNED NOT NULL,
			revision INT UNSIGNED NOT NULL,
			corner_id BIGINT UNSIGNED NULL,
			start_m DOUBLE NOT NULL,
			end_m DOUBLE NOT NULL,
			body TEXT NOT NULL,
			target JSON NULL,
			changed_by BIGINT UNSIGNED NULL,
			changed_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			PRIMARY KEY (zone_note_id, revision),
			KEY zone_note_revisions_changed_by (changed_by),
			CONSTRAINT zone_note_revisions_note_fk FOREIGN KEY (zone_note_id) REFERENCES zone_notes (id) ON DELETE CASCADE,
			CONSTRAINT zone_note_revisions_changed_by_fk FOREIGN KEY (changed_by) REFERENCES people (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
