import type { Knex } from 'knex';

/** unique_key holds while the job waits or runs, so that the same work is never queued twice. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS jobs (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			kind VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
			unique_key VARCHAR(120) CHARACTER SET ascii COLLATE ascii_bin NULL,
			payload JSON NOT NULL,
			status ENUM('waiting','running','done','failed','cancelled') NOT NULL DEFAULT 'waiting',
			attempts SMALLINT UNSIGNED NOT NULL DEFAULT 0,
			max_attempts SMALLINT UNSIGNED NOT NULL DEFAULT 5,
			run_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			claimed_by VARCHAR(80) CHARACTER SET ascii COLLATE ascii_bin NULL,
			claimed_at DATETIME(3) NULL,
			heartbeat_at DATETIME(3) NULL,
			error_code VARCHAR(60) CHARACTER SET ascii COLLATE ascii_bin NULL,
			error_message VARCHAR(1000) NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			finished_at DATETIME(3) NULL,
			UNIQUE KEY jobs_unique_key (unique_key),
			KEY jobs_due (status, run_at, id),
			KEY jobs_beat (status, heartbeat_at)
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
