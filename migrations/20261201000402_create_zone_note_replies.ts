import type { Knex } from 'knex';

/** A driver's words on a zone note, and the coach's on those. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS zone_note_replies (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			zone_note_id BIGINT UNSIGNED NOT NULL,
			author_id BIGINT UNSIGNED NOT NULL,
			body TEXT NOT NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			UNIQUE KEY zone_note_replies_public_id (public_id),
			KEY zone_note_replies_note (zone_note_id, id),
			KEY zone_note_replies_author (author_id),
			CONSTRAINT zone_note_replies_note_fk FOREIGN KEY (zone_note_id) REFERENCES zone_notes (id) ON DELETE CASCADE,
			CONSTRAINT zone_note_replies_author_fk FOREIGN KEY (author_id) REFERENCES people (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
