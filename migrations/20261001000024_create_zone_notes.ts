import type { Knex } from 'knex';

/** A coach's mark on a stretch of the path version that it names; without a driver it is for all drivers of the author. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS zone_notes (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			author_id BIGINT UNSIGNED NOT NULL,
			driver_id BIGINT UNSIGNED NULL,
			layout_id BIGINT UNSIGNED NOT NULL,
			path_version INT UNSIGNED NOT NULL,
			corner_id BIGINT UNSIGNED NULL,
			run_id BIGINT UNSIGNED NULL,
			start_m DOUBLE NOT NULL,
			end_m DOUBLE NOT NULL,
			body TEXT NOT NULL,
			target JSON NULL,
			revision INT UNSIGNED NOT NULL DEFAULT 1,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			deleted_at DATETIME(3) NULL,
			UNIQUE KEY zone_notes_public_id (public_id),
			KEY zone_notes_layout (layout_id, driver_id),
			KEY zone_notes_path (layout_id, path_version),
			KEY zone_notes_author (author_id),
			KEY zone_notes_driver (driver_id),
			KEY zone_notes_corner (corner_id),
			KEY zone_notes_run (run_id),
			CONSTRAINT zone_notes_author_id_fk FOREIGN KEY (author_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT zone_notes_driver_id_fk FOREIGN KEY (driver_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT zone_notes_path_fk FOREIGN KEY (layout_id, path_version) REFERENCES path_versions (layout_id, version) ON DELETE CASCADE,
			CONSTRAINT zone_notes_corner_id_fk FOREIGN KEY (corner_id) REFERENCES corners (id) ON DELETE SET NULL,
			CONSTRAINT zone_notes_run_id_fk FOREIGN KEY (run_id) REFERENCES runs (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
