import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS corner_maps (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			layout_id BIGINT UNSIGNED NOT NULL,
			version INT UNSIGNED NOT NULL,
			path_version INT UNSIGNED NOT NULL,
			cells JSON NOT NULL,
			created_by BIGINT UNSIGNED NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			UNIQUE KEY corner_maps_version (layout_id, version),
			KEY corner_maps_path (layout_id, path_version),
			KEY corner_maps_created_by (created_by),
			CONSTRAINT corner_maps_path_fk FOREIGN KEY (layout_id, path_version) REFERENCES path_versions (layout_id, version) ON DELETE CASCADE,
			CONSTRAINT corner_maps_created_by_fk FOREIGN KEY (created_by) REFERENCES people (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
