import type { Knex } from 'knex';

/** The raw file is kept under storage_key. revision counts what a person changed about how it is read; an import of an older revision stores nothing. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS uploads (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			owner_id BIGINT UNSIGNED NOT NULL,
			uploaded_by BIGINT UNSIGNED NULL,
			file_name VARCHAR(255) NOT NULL,
			size_bytes BIGINT UNSIGNED NOT NULL DEFAULT 0,
			sha256 BINARY(32) NULL,
			storage_key VARCHAR(120) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
			state ENUM('receiving','stored','reading','needs_answer','analysed','refused') NOT NULL,
			stage ENUM('waiting','reading','laps','corners','storing','done') NOT NULL DEFAULT 'waiting',
			progress FLOAT NOT NULL DEFAULT 0,
			revision INT UNSIGNED NOT NULL DEFAULT 1,
			mapping JSON NULL,
			understood JSON NULL,
			error JSON NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			stored_at DATETIME(3) NULL,
			deleted_at DATETIME(3) NULL,
			UNIQUE KEY uploads_public_id (public_id),
			KEY uploads_owner (owner_id, created_at),
			KEY uploads_same_file (owner_id, sha256),
			KEY uploads_state (state, created_at),
			KEY uploads_uploaded_by (uploaded_by),
			CONSTRAINT uploads_owner_id_fk FOREIGN KEY (owner_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT uploads_uploaded_by_fk FOREIGN KEY (uploaded_by) REFERENCES people (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
