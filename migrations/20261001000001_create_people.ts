import type { Knex } from 'knex';

/** E-mail addresses are stored lower-cased in NFKC, so that the binary collation compares what people mean. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS people (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			email VARCHAR(254) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NULL,
			name VARCHAR(120) NOT NULL,
			password_hash VARCHAR(255) CHARACTER SET ascii COLLATE ascii_bin NULL,
			is_minor BOOLEAN NOT NULL DEFAULT FALSE,
			preferences JSON NOT NULL DEFAULT '{}',
			locale VARCHAR(35) CHARACTER SET ascii COLLATE ascii_bin NULL,
			time_zone VARCHAR(64) CHARACTER SET ascii COLLATE ascii_bin NULL,
			email_verified_at DATETIME(3) NULL,
			disabled_at DATETIME(3) NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			UNIQUE KEY people_public_id (public_id),
			UNIQUE KEY people_email (email)
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
