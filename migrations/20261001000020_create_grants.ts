import type { Knex } from 'knex';

/** Who admits whom to which laps. Exactly one grantee; the scope names exactly what it needs. A revoked row stays. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS grants (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			owner_id BIGINT UNSIGNED NOT NULL,
			grantee_person_id BIGINT UNSIGNED NULL,
			grantee_organisation_id BIGINT UNSIGNED NULL,
			scope ENUM('all','circuit','event','run') NOT NULL,
			circuit_id BIGINT UNSIGNED NULL,
			event_id BIGINT UNSIGNED NULL,
			run_id BIGINT UNSIGNED NULL,
			from_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			revoked_at DATETIME(3) NULL,
			created_by BIGINT UNSIGNED NULL,
			revoked_by BIGINT UNSIGNED NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			UNIQUE KEY grants_public_id (public_id),
			KEY grants_owner (owner_id, grantee_person_id),
			KEY grants_person (grantee_person_id, owner_id),
			KEY grants_organisation (grantee_organisation_id, owner_id),
			KEY grants_circuit (circuit_id),
			KEY grants_event (event_id),
			KEY grants_run (run_id),
			KEY grants_created_by (created_by),
			KEY grants_revoked_by (revoked_by),
			CONSTRAINT grants_owner_id_fk FOREIGN KEY (owner_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT grants_grantee_person_id_fk FOREIGN KEY (grantee_person_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT grants_grantee_organisation_id_fk FOREIGN KEY (grantee_organisation_id) REFERENCES organisations (id) ON DELETE CASCADE,
			CONSTRAINT grants_circuit_id_fk FOREIGN KEY (circuit_id) REFERENCES circuits (id) ON DELETE CASCADE,
			CONSTRAINT grants_event_id_fk FOREIGN KEY (event_id) REFERENCES events (id) ON DELETE CASCADE,
			CONSTRAINT grants_run_id_fk FOREIGN KEY (run_id) REFERENCES runs (id) ON DELETE CASCADE,
			CONSTRAINT grants_created_by_fk FOREIGN KEY (created_by) REFERENCES people (id) ON DELETE SET NULL,
			CONSTRAINT grants_revoked_by_fk FOREIGN KEY (revoked_by) REFERENCES people (id) ON DELETE SET NULL
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
