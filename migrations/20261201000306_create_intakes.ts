import type { Knex } from 'knex';

/** What a driver says of experience, goals and equipment. Each saving is a version of its own, so that a coach sees what changed. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS intakes (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			owner_id BIGINT UNSIGNED NOT NULL,
			version INT UNSIGNED NOT NULL,
			answers JSON NOT NULL,
			created_by BIGINT UNSIGNED NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			UNIQUE KEY intakes_version (owner_id, version),
			KEY intakes_created_by (created_by),
			CONSTRAINT intakes_owner_id_fk FOREIGN KEY (owner_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT intakes_created_by_fk FOREIGN KEY (created_by) REFERENCES people (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
