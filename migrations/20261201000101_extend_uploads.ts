import type { Knex } from 'knex';

/**
 * content_key repeats sha256 while the upload counts, so that one person's file is there once; same_as_id says of a row without
 * bytes which upload has them. analysed_with is the version of the analysis that last had a try at the file.
 */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		ALTER TABLE uploads
			ADD COLUMN IF NOT EXISTS kind ENUM('file','archive') NOT NULL DEFAULT 'file',
			ADD COLUMN IF NOT EXISTS parent_id BIGINT UNSIGNED NULL,
			ADD COLUMN IF NOT EXISTS archive_files JSON NULL,
			ADD COLUMN IF NOT EXISTS is_resumable BOOLEAN NOT NULL DEFAULT FALSE,
			ADD COLUMN IF NOT EXISTS received_bytes BIGINT UNSIGNED NOT NULL DEFAULT 0,
			ADD COLUMN IF NOT EXISTS rows_read INT UNSIGNED NULL,
			ADD COLUMN IF NOT EXISTS content_key BINARY(32) NULL,
			ADD COLUMN IF NOT EXISTS same_as_id BIGINT UNSIGNED NULL,
			ADD COLUMN IF NOT EXISTS header_key BINARY(32) NULL,
			ADD COLUMN IF NOT EXISTS remembered_mapping_used BOOLEAN NOT NULL DEFAULT FALSE,
			ADD COLUMN IF NOT EXISTS analysed_with VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin NULL,
			ADD UNIQUE KEY IF NOT EXISTS uploads_content (owner_id, content_key),
			ADD KEY IF NOT EXISTS uploads_changed (owner_id, updated_at),
			ADD KEY IF NOT EXISTS uploads_version (state, analysed_with),
			ADD KEY IF NOT EXISTS uploads_deleted (deleted_at),
			ADD CONSTRAINT uploads_parent_id_fk FOREIGN KEY IF NOT EXISTS (parent_id) REFERENCES uploads (id) ON DELETE SET NULL,
			ADD CONSTRAINT uploads_same_as_id_fk FOREIGN KEY IF NOT EXISTS (same_as_id) REFERENCES uploads (id) ON DELETE CASCADE
	`);
}
