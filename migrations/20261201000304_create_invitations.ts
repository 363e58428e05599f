import type { Knex } from 'knex';

/** Who was asked to join, by whom, as what; of the link only its hash. What the asked person lets be seen stands in `grants`. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS invitations (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			public_id BINARY(16) NOT NULL,
			token_hash BINARY(32) NOT NULL,
			email VARCHAR(254) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
			inviter_id BIGINT UNSIGNED NOT NULL,
			organisation_id BIGINT UNSIGNED NULL,
			role ENUM('driver','coach','manager','admin') NOT NULL,
			asked_scope ENUM('all','circuit','event','run') NULL,
			asked_circuit_id BIGINT UNSIGNED NULL,
			asked_event_id BIGINT UNSIGNED NULL,
			note VARCHAR(1000) NULL,
			state ENUM('open','waiting_guardian','accepted','declined','withdrawn') NOT NULL DEFAULT 'open',
			answered_by BIGINT UNSIGNED NULL,
			answered_at DATETIME(3) NULL,
			mail_public_id BINARY(16) NULL,
			expires_at DATETIME(3) NOT NULL,
			created_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			UNIQUE KEY invitations_public_id (public_id),
			UNIQUE KEY invitations_token (token_hash),
			KEY invitations_inviter (inviter_id, state, created_at),
			KEY invitations_organisation (organisation_id, state, created_at),
			KEY invitations_circuit (asked_circuit_id),
			KEY invitations_event (asked_event_id),
			KEY invitations_answered_by (answered_by),
			CONSTRAINT invitations_inviter_id_fk FOREIGN KEY (inviter_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT invitations_organisation_id_fk FOREIGN KEY (organisation_id) REFERENCES organisations (id) ON DELETE CASCADE,
			CONSTRAINT invitations_asked_circuit_id_fk FOREIGN KEY (asked_circuit_id) REFERENCES circuits (id) ON DELETE SET NULL,
			CONSTRAINT invitations_asked_event_id_fk FOREIGN KEY (asked_event_id) REFERENCES events (id) ON DELETE SET NULL,
			CONSTRAINT invitations_answered_by_fk FOREIGN KEY (answered_by) REFERENCES people (id) ON DELETE SET NULL,
			CONSTRAINT invitations_coach_asks_drivers CHECK (organisation_id IS NOT NULL OR role = 'driver')
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
