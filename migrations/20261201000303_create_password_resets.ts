import type { Knex } from 'knex';

/** Links by which a person chooses a new password: only their hash, for an hour, good once. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS password_resets (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			person_id BIGINT UNSIGNED NOT NULL,
			token_hash BINARY(32) NOT NULL,
			expires_at DATETIME(3) NOT NULL,
			used_at DATETIME(3) NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			UNIQUE KEY password_resets_token (token_hash),
			KEY password_resets_person (person_id),
			KEY password_resets_expiry (expires_at),
			CONSTRAINT password_resets_person_id_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
