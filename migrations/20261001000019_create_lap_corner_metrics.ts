import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS lap_corner_metrics (
			lap_id BIGINT UNSIGNED NOT NULL,
			corner_id BIGINT UNSIGNED NOT NULL,
			number SMALLINT UNSIGNED NOT NULL,
			onset_m DOUBLE NULL,
			onset_s DOUBLE NULL,
			peak_pct DOUBLE NULL,
			peak_raw_pct DOUBLE NULL,
			peak_m DOUBLE NULL,
			rise_s DOUBLE NULL,
			release_start_m DOUBLE NULL,
			release_end_m DOUBLE NULL,
			release_s DOUBLE NULL,
			light_hold_s DOUBLE NULL,
			trail_s DOUBLE NULL,
			trail_m DOUBLE NULL,
			turn_in_m DOUBLE NULL,
			entry_kmh DOUBLE NULL,
			min_kmh DOUBLE NULL,
			min_speed_m DOUBLE NULL,
			lift_m DOUBLE NULL,
			smallest_opening_pct DOUBLE NULL,
			smallest_opening_m DOUBLE NULL,
			pick_up_m DOUBLE NULL,
			full_throttle_m DOUBLE NULL,
			second_lift_s DOUBLE NULL,
			overlap_s DOUBLE NULL,
			coasting_s DOUBLE NULL,
			exit_kmh DOUBLE NULL,
			idle_gap_s DOUBLE NULL,
			time_s DOUBLE NULL,
			release_progressive BOOLEAN NULL,
			dabs SMALLINT UNSIGNED NULL,
			lock_ups SMALLINT UNSIGNED NULL,
			plus_minus JSON NOT NULL,
			reasons JSON NOT NULL,
			PRIMARY KEY (lap_id, corner_id),
			KEY lap_corner_metrics_corner (corner_id, lap_id),
			CONSTRAINT lap_corner_metrics_lap_id_fk FOREIGN KEY (lap_id) REFERENCES laps (id) ON DELETE CASCADE,
			CONSTRAINT lap_corner_metrics_corner_id_fk FOREIGN KEY (corner_id) REFERENCES corners (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
