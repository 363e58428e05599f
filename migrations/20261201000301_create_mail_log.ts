import type { Knex } from 'knex';

/**
 * Every letter that was to go out. `sealed` holds subject and bodies, encrypted, until it is sent: they carry links that open
 * accounts, and a copy of this table must not.
 */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS mail_log (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			kind VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
			to_email VARCHAR(254) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
			to_person_id BIGINT UNSIGNED NULL,
			subject VARCHAR(200) NOT NULL,
			sealed MEDIUMBLOB NULL,
			state ENUM('queued','sent','failed','bounced') NOT NULL DEFAULT 'queued',
			is_outbox_only BOOLEAN NOT NULL DEFAULT FALSE,
			attempts SMALLINT UNSIGNED NOT NULL DEFAULT 0,
			error VARCHAR(500) NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			sent_at DATETIME(3) NULL,
			UNIQUE KEY mail_log_public_id (public_id),
			KEY mail_log_created (created_at),
			KEY mail_log_state (state, created_at),
			KEY mail_log_person (to_person_id, created_at),
			CONSTRAINT mail_log_to_person_id_fk FOREIGN KEY (to_person_id) REFERENCES people (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
