import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS events (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			organisation_id BIGINT UNSIGNED NOT NULL,
			name VARCHAR(120) NOT NULL,
			layout_id BIGINT UNSIGNED NULL,
			car_id BIGINT UNSIGNED NULL,
			starts_on DATE NULL,
			ends_on DATE NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			UNIQUE KEY events_public_id (public_id),
			KEY events_organisation (organisation_id),
			KEY events_layout (layout_id),
			KEY events_car (car_id),
			CONSTRAINT events_organisation_id_fk FOREIGN KEY (organisation_id) REFERENCES organisations (id) ON DELETE CASCADE,
			CONSTRAINT events_layout_id_fk FOREIGN KEY (layout_id) REFERENCES layouts (id) ON DELETE SET NULL,
			CONSTRAINT events_car_id_fk FOREIGN KEY (car_id) REFERENCES cars (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
