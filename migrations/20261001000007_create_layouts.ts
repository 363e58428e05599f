import type { Knex } from 'knex';

/** path_version and map_version say which versions hold now; the centre finds a layout by position. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS layouts (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			circuit_id BIGINT UNSIGNED NOT NULL,
			name VARCHAR(120) NOT NULL,
			length_m DOUBLE NOT NULL,
			is_closed BOOLEAN NOT NULL DEFAULT TRUE,
			centre_latitude_deg DOUBLE NULL,
			centre_longitude_deg DOUBLE NULL,
			path_version INT UNSIGNED NOT NULL DEFAULT 1,
			map_version INT UNSIGNED NOT NULL DEFAULT 1,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			UNIQUE KEY layouts_public_id (public_id),
			KEY layouts_circuit (circuit_id),
			KEY layouts_length (length_m),
			CONSTRAINT layouts_circuit_id_fk FOREIGN KEY (circuit_id) REFERENCES circuits (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
