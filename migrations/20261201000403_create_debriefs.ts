import type { Knex } from 'knex';

/** What a coach writes on one run; content is the coach's, revision counts its changes. A sent one is frozen beside it. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS debriefs (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			author_id BIGINT UNSIGNED NOT NULL,
			driver_id BIGINT UNSIGNED NOT NULL,
			run_id BIGINT UNSIGNED NOT NULL,
			lap_id BIGINT UNSIGNED NULL,
			reference_lap_id BIGINT UNSIGNED NULL,
			content JSON NOT NULL,
			revision INT UNSIGNED NOT NULL DEFAULT 1,
			sent_at DATETIME(3) NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			updated_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3) ON UPDATE CURRENT_TIMESTAMP(3),
			deleted_at DATETIME(3) NULL,
			UNIQUE KEY debriefs_public_id (public_id),
			KEY debriefs_author (author_id, updated_at),
			KEY debriefs_driver (driver_id, sent_at),
			KEY debriefs_run (run_id, author_id),
			KEY debriefs_lap (lap_id),
			KEY debriefs_reference_lap (reference_lap_id),
			CONSTRAINT debriefs_author_fk FOREIGN KEY (author_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT debriefs_driver_fk FOREIGN KEY (driver_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT debriefs_run_fk FOREIGN KEY (run_id) REFERENCES runs (id) ON DELETE CASCADE,
			CONSTRAINT debriefs_lap_fk FOREIGN KEY (lap_id) REFERENCES laps (id) ON DELETE SET NULL,
			CONSTRAINT debriefs_reference_lap_fk FOREIGN KEY (reference_lap_id) REFERENCES laps (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
