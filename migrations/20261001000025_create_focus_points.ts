import type { Knex } from 'knex';

/** A target that a driver works on. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS focus_points (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			driver_id BIGINT UNSIGNED NOT NULL,
			set_by BIGINT UNSIGNED NULL,
			layout_id BIGINT UNSIGNED NOT NULL,
			car_id BIGINT UNSIGNED NULL,
			corner_id BIGINT UNSIGNED NULL,
			zone_note_id BIGINT UNSIGNED NULL,
			target JSON NOT NULL,
			state ENUM('open','met','dropped') NOT NULL DEFAULT 'open',
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			closed_at DATETIME(3) NULL,
			UNIQUE KEY focus_points_public_id (public_id),
			KEY focus_points_driver (driver_id, state),
			KEY focus_points_layout (layout_id),
			KEY focus_points_set_by (set_by),
			KEY focus_points_car (car_id),
			KEY focus_points_corner (corner_id),
			KEY focus_points_zone_note (zone_note_id),
			CONSTRAINT focus_points_driver_id_fk FOREIGN KEY (driver_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT focus_points_set_by_fk FOREIGN KEY (set_by) REFERENCES people (id) ON DELETE SET NULL,
			CONSTRAINT focus_points_layout_id_fk FOREIGN KEY (layout_id) REFERENCES layouts (id) ON DELETE CASCADE,
			CONSTRAINT focus_points_car_id_fk FOREIGN KEY (car_id) REFERENCES cars (id) ON DELETE SET NULL,
			CONSTRAINT focus_points_corner_id_fk FOREIGN KEY (corner_id) REFERENCES corners (id) ON DELETE SET NULL,
			CONSTRAINT focus_points_zone_note_id_fk FOREIGN KEY (zone_note_id) REFERENCES zone_notes (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
