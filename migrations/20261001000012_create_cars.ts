import type { Knex } from 'knex';

/** brake_full is what 100 % of the brake stands for in brake_unit, set by a person or fixed once from runs. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS cars (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			owner_id BIGINT UNSIGNED NOT NULL,
			organisation_id BIGINT UNSIGNED NULL,
			name VARCHAR(120) NOT NULL,
			brake_full DOUBLE NULL,
			brake_unit ENUM('pct','bar','n','raw','switch') NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			UNIQUE KEY cars_public_id (public_id),
			KEY cars_owner (owner_id),
			KEY cars_organisation (organisation_id),
			CONSTRAINT cars_owner_id_fk FOREIGN KEY (owner_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT cars_organisation_id_fk FOREIGN KEY (organisation_id) REFERENCES organisations (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
