import type { Knex } from 'knex';

/** A link carries a random value; only its SHA-256 is stored. It opens one sent debrief and nothing else. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS debrief_links (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			sent_debrief_id BIGINT UNSIGNED NOT NULL,
			token_hash BINARY(32) NOT NULL,
			created_by BIGINT UNSIGNED NOT NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			expires_at DATETIME(3) NOT NULL,
			revoked_at DATETIME(3) NULL,
			opened_at DATETIME(3) NULL,
			UNIQUE KEY debrief_links_public_id (public_id),
			UNIQUE KEY debrief_links_token (token_hash),
			KEY debrief_links_sent (sent_debrief_id),
			KEY debrief_links_created_by (created_by),
			CONSTRAINT debrief_links_sent_fk FOREIGN KEY (sent_debrief_id) REFERENCES sent_debriefs (id) ON DELETE CASCADE,
			CONSTRAINT debrief_links_created_by_fk FOREIGN KEY (created_by) REFERENCES people (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
