import type { Knex } from 'knex';

/** Times are whole microseconds, from the run's first sample. cell_us holds the time in each cell of the corner map, null where the lap has no complete pass. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS laps (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			run_id BIGINT UNSIGNED NOT NULL,
			analysis_id BIGINT UNSIGNED NOT NULL,
			ordinal SMALLINT UNSIGNED NOT NULL,
			number INT NOT NULL,
			kind ENUM('out','timed','in','partial') NOT NULL,
			start_us BIGINT NOT NULL,
			time_us BIGINT NOT NULL,
			plus_minus_us BIGINT NOT NULL DEFAULT 0,
			length_m DOUBLE NULL,
			is_clean BOOLEAN NOT NULL,
			reasons JSON NOT NULL,
			cell_us JSON NOT NULL,
			grid_length_m DOUBLE NULL,
			grid_margin_m SMALLINT UNSIGNED NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			UNIQUE KEY laps_public_id (public_id),
			UNIQUE KEY laps_ordinal (run_id, ordinal),
			KEY laps_best (run_id, is_clean, time_us),
			KEY laps_analysis (analysis_id),
			CONSTRAINT laps_run_id_fk FOREIGN KEY (run_id) REFERENCES runs (id) ON DELETE CASCADE,
			CONSTRAINT laps_analysis_id_fk FOREIGN KEY (analysis_id) REFERENCES analyses (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
