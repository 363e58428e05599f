import type { Knex } from 'knex';

/** A frozen copy: what was sent stays as it was, whatever is measured or written later. One for each debrief. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS sent_debriefs (
			id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
			debrief_id BIGINT UNSIGNED NOT NULL,
			document JSON NOT NULL,
			sent_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			read_at DATETIME(3) NULL,
			UNIQUE KEY sent_debriefs_debrief (debrief_id),
			CONSTRAINT sent_debriefs_debrief_fk FOREIGN KEY (debrief_id) REFERENCES debriefs (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
