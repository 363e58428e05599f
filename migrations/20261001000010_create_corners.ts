import type { Knex } from 'knex';

/** What stays of a corner across versions of the map: its id and its name. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS corners (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			layout_id BIGINT UNSIGNED NOT NULL,
			name VARCHAR(80) NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			UNIQUE KEY corners_public_id (public_id),
			KEY corners_layout (layout_id),
			CONSTRAINT corners_layout_id_fk FOREIGN KEY (layout_id) REFERENCES layouts (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
