import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS api_tokens (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			person_id BIGINT UNSIGNED NOT NULL,
			name VARCHAR(80) NOT NULL,
			token_hash BINARY(32) NOT NULL,
			scopes JSON NOT NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			last_used_at DATETIME(3) NULL,
			expires_at DATETIME(3) NULL,
			revoked_at DATETIME(3) NULL,
			UNIQUE KEY api_tokens_public_id (public_id),
			UNIQUE KEY api_tokens_token (token_hash),
			KEY api_tokens_person (person_id),
			CONSTRAINT api_tokens_person_id_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
