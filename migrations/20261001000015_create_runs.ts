import type { Knex } from 'knex';

/** sort_at is when the run began, or when it was handed over where nobody knows. The summary columns repeat what its laps say, so that lists touch no lap. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS runs (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			owner_id BIGINT UNSIGNED NOT NULL,
			upload_id BIGINT UNSIGNED NULL,
			run_index SMALLINT UNSIGNED NOT NULL DEFAULT 1,
			layout_id BIGINT UNSIGNED NOT NULL,
			car_id BIGINT UNSIGNED NULL,
			event_id BIGINT UNSIGNED NULL,
			analysis_id BIGINT UNSIGNED NULL,
			started_at DATETIME(3) NULL,
			sort_at DATETIME(3) NOT NULL,
			place ENUM('simulator','real','unknown') NOT NULL DEFAULT 'unknown',
			conditions ENUM('dry','damp','wet','unknown') NOT NULL DEFAULT 'unknown',
			intent ENUM('pace','learning','fuel','tyres','unknown') NOT NULL DEFAULT 'unknown',
			tyre_set VARCHAR(60) NULL,
			fuel_kg DOUBLE NULL,
			timed_laps SMALLINT UNSIGNED NOT NULL DEFAULT 0,
			clean_laps SMALLINT UNSIGNED NOT NULL DEFAULT 0,
			best_lap_id BIGINT UNSIGNED NULL,
			best_time_us BIGINT NULL,
			best_is_clean BOOLEAN NOT NULL DEFAULT FALSE,
			theoretical_best_us BIGINT NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			deleted_at DATETIME(3) NULL,
			UNIQUE KEY runs_public_id (public_id),
			UNIQUE KEY runs_upload (upload_id, run_index),
			KEY runs_owner (owner_id, sort_at),
			KEY runs_layout (layout_id, owner_id, best_time_us),
			KEY runs_car (car_id),
			KEY runs_event (event_id),
			KEY runs_analysis (analysis_id),
			KEY runs_best_lap (best_lap_id),
			CONSTRAINT runs_owner_id_fk FOREIGN KEY (owner_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT runs_upload_id_fk FOREIGN KEY (upload_id) REFERENCES uploads (id) ON DELETE CASCADE,
			CONSTRAINT runs_layout_id_fk FOREIGN KEY (layout_id) REFERENCES layouts (id) ON DELETE RESTRICT,
			CONSTRAINT runs_car_id_fk FOREIGN KEY (car_id) REFERENCES cars (id) ON DELETE SET NULL,
			CONSTRAINT runs_event_id_fk FOREIGN KEY (event_id) REFERENCES events (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
