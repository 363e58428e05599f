import type { Knex } from 'knex';

/** Where a corner lies in one version of the map, in m on the map's path version. A kink has no number. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS corner_places (
			corner_map_id BIGINT UNSIGNED NOT NULL,
			corner_id BIGINT UNSIGNED NOT NULL,
			number SMALLINT UNSIGNED NULL,
			start_m DOUBLE NOT NULL,
			apex_m DOUBLE NOT NULL,
			apex2_m DOUBLE NULL,
			end_m DOUBLE NOT NULL,
			direction ENUM('left','right') NULL,
			min_radius_m DOUBLE NULL,
			angle_deg DOUBLE NULL,
			linked_to SMALLINT UNSIGNED NULL,
			kind ENUM('braked','lifted','flat') NULL,
			PRIMARY KEY (corner_map_id, corner_id),
			UNIQUE KEY corner_places_number (corner_map_id, number),
			KEY corner_places_corner (corner_id),
			CONSTRAINT corner_places_corner_map_id_fk FOREIGN KEY (corner_map_id) REFERENCES corner_maps (id) ON DELETE CASCADE,
			CONSTRAINT corner_places_corner_id_fk FOREIGN KEY (corner_id) REFERENCES corners (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
