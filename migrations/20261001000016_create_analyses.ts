import type { Knex } from 'knex';

/** One reading of a run: which code, mapping, path and map it stands on. A newer one takes its place in one transaction. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS analyses (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			run_id BIGINT UNSIGNED NOT NULL,
			code_version VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
			mapping JSON NULL,
			layout_id BIGINT UNSIGNED NOT NULL,
			path_version INT UNSIGNED NOT NULL,
			map_version INT UNSIGNED NOT NULL,
			sample_rate_hz DOUBLE NOT NULL,
			channels JSON NOT NULL,
			warnings JSON NOT NULL,
			lock_ups JSON NOT NULL,
			full_throttle JSON NULL,
			brake_unit ENUM('pct','bar','n','raw','switch') NULL,
			brake_full DOUBLE NULL,
			brake_scale_assumed BOOLEAN NOT NULL,
			speed_strip JSON NOT NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			KEY analyses_run (run_id),
			KEY analyses_path (layout_id, path_version),
			KEY analyses_map (layout_id, map_version),
			CONSTRAINT analyses_run_id_fk FOREIGN KEY (run_id) REFERENCES runs (id) ON DELETE CASCADE,
			CONSTRAINT analyses_path_fk FOREIGN KEY (layout_id, path_version) REFERENCES path_versions (layout_id, version),
			CONSTRAINT analyses_map_fk FOREIGN KEY (layout_id, map_version) REFERENCES corner_maps (layout_id, version)
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
