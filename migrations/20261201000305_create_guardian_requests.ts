import type { Knex } from 'knex';

/**
 * A minor named a guardian, who has to agree before anything opens. `opens_account`: the account was made for this and is
 * closed until then; with a no, or without an answer, it goes again.
 */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS guardian_requests (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			token_hash BINARY(32) NOT NULL,
			minor_id BIGINT UNSIGNED NOT NULL,
			invitation_id BIGINT UNSIGNED NOT NULL,
			email VARCHAR(254) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
			opens_account BOOLEAN NOT NULL,
			sees VARCHAR(60) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
			expires_at DATETIME(3) NOT NULL,
			answered_at DATETIME(3) NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			UNIQUE KEY guardian_requests_token (token_hash),
			KEY guardian_requests_minor (minor_id),
			KEY guardian_requests_invitation (invitation_id),
			KEY guardian_requests_expiry (answered_at, expires_at),
			CONSTRAINT guardian_requests_minor_id_fk FOREIGN KEY (minor_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT guardian_requests_invitation_id_fk FOREIGN KEY (invitation_id) REFERENCES invitations (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
