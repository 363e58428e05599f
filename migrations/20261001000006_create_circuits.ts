import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS circuits (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			name VARCHAR(120) NOT NULL,
			created_by BIGINT UNSIGNED NULL,
			organisation_id BIGINT UNSIGNED NULL,
			is_public BOOLEAN NOT NULL DEFAULT FALSE,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			UNIQUE KEY circuits_public_id (public_id),
			KEY circuits_created_by (created_by),
			KEY circuits_organisation (organisation_id),
			CONSTRAINT circuits_created_by_fk FOREIGN KEY (created_by) REFERENCES people (id) ON DELETE SET NULL,
			CONSTRAINT circuits_organisation_id_fk FOREIGN KEY (organisation_id) REFERENCES organisations (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
