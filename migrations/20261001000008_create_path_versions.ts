import type { Knex } from 'knex';

/** A layout's reference path on a 1 m grid; every stored place on the path names the version that it is measured on. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS path_versions (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			layout_id BIGINT UNSIGNED NOT NULL,
			version INT UNSIGNED NOT NULL,
			length_m DOUBLE NOT NULL,
			is_closed BOOLEAN NOT NULL,
			origin ENUM('positions','latAcc','yawRate','steering','speedOnly') NOT NULL,
			line ENUM('mark','layout','chosen') NOT NULL,
			frame_latitude_deg DOUBLE NULL,
			frame_longitude_deg DOUBLE NULL,
			outline JSON NOT NULL,
			codec TINYINT UNSIGNED NOT NULL,
			payload MEDIUMBLOB NOT NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			UNIQUE KEY path_versions_version (layout_id, version),
			CONSTRAINT path_versions_layout_id_fk FOREIGN KEY (layout_id) REFERENCES layouts (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
