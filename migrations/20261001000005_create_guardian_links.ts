import type { Knex } from 'knex';

/** A minor's account is held by a guardian, who consents, shares and pays. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS guardian_links (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			guardian_id BIGINT UNSIGNED NOT NULL,
			minor_id BIGINT UNSIGNED NOT NULL,
			consent_at DATETIME(3) NULL,
			since DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			ended_at DATETIME(3) NULL,
			UNIQUE KEY guardian_links_pair (guardian_id, minor_id),
			KEY guardian_links_minor (minor_id),
			CONSTRAINT guardian_links_guardian_id_fk FOREIGN KEY (guardian_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT guardian_links_minor_id_fk FOREIGN KEY (minor_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT guardian_links_two CHECK (guardian_id <> minor_id)
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
