import type { Knex } from 'knex';

/** Append only. Keeps no foreign key, so that an erasure does not rewrite it. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS audit_log (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			actor_id BIGINT UNSIGNED NULL,
			action VARCHAR(60) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
			subject_kind VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin NULL,
			subject_id BINARY(16) NULL,
			detail JSON NOT NULL DEFAULT '{}',
			address VARCHAR(45) CHARACTER SET ascii COLLATE ascii_bin NULL,
			KEY audit_log_at (at),
			KEY audit_log_actor (actor_id, at),
			KEY audit_log_subject (subject_kind, subject_id)
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
