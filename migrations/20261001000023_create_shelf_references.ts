import type { Knex } from 'knex';

/** A lap on the shelf of a person or an organisation. Standing there opens it to nobody: who may see the lap is decided by its run. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS shelf_references (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			person_id BIGINT UNSIGNED NULL,
			organisation_id BIGINT UNSIGNED NULL,
			layout_id BIGINT UNSIGNED NOT NULL,
			car_id BIGINT UNSIGNED NULL,
			lap_id BIGINT UNSIGNED NOT NULL,
			name VARCHAR(120) NOT NULL,
			note TEXT NULL,
			created_by BIGINT UNSIGNED NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			removed_at DATETIME(3) NULL,
			UNIQUE KEY shelf_references_public_id (public_id),
			KEY shelf_references_layout (layout_id, person_id),
			KEY shelf_references_layout_organisation (layout_id, organisation_id),
			KEY shelf_references_person (person_id),
			KEY shelf_references_organisation (organisation_id),
			KEY shelf_references_lap (lap_id),
			KEY shelf_references_car (car_id),
			KEY shelf_references_created_by (created_by),
			CONSTRAINT shelf_references_person_id_fk FOREIGN KEY (person_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT shelf_references_organisation_id_fk FOREIGN KEY (organisation_id) REFERENCES organisations (id) ON DELETE CASCADE,
			CONSTRAINT shelf_references_layout_id_fk FOREIGN KEY (layout_id) REFERENCES layouts (id) ON DELETE CASCADE,
			CONSTRAINT shelf_references_car_id_fk FOREIGN KEY (car_id) REFERENCES cars (id) ON DELETE SET NULL,
			CONSTRAINT shelf_references_lap_id_fk FOREIGN KEY (lap_id) REFERENCES laps (id) ON DELETE CASCADE,
			CONSTRAINT shelf_references_created_by_fk FOREIGN KEY (created_by) REFERENCES people (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
