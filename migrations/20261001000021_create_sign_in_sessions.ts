import type { Knex } from 'knex';

/** A cookie carries a random value; only its SHA-256 is stored. A revoked row refuses every copy of the cookie. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS sign_in_sessions (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			person_id BIGINT UNSIGNED NOT NULL,
			token_hash BINARY(32) NOT NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			last_seen_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			expires_at DATETIME(3) NOT NULL,
			revoked_at DATETIME(3) NULL,
			user_agent VARCHAR(255) NULL,
			address VARCHAR(45) CHARACTER SET ascii COLLATE ascii_bin NULL,
			UNIQUE KEY sign_in_sessions_public_id (public_id),
			UNIQUE KEY sign_in_sessions_token (token_hash),
			KEY sign_in_sessions_person (person_id, revoked_at),
			KEY sign_in_sessions_expiry (expires_at),
			CONSTRAINT sign_in_sessions_person_id_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
