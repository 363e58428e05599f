import type { Knex } from 'knex';

/** What driver and coach say under a sent debrief. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS debrief_replies (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			sent_debrief_id BIGINT UNSIGNED NOT NULL,
			author_id BIGINT UNSIGNED NOT NULL,
			body TEXT NOT NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			KEY debrief_replies_sent (sent_debrief_id, id),
			KEY debrief_replies_author (author_id),
			CONSTRAINT debrief_replies_sent_fk FOREIGN KEY (sent_debrief_id) REFERENCES sent_debriefs (id) ON DELETE CASCADE,
			CONSTRAINT debrief_replies_author_fk FOREIGN KEY (author_id) REFERENCES people (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
