import type { Knex } from 'knex';

/** What the driver says that they tried; a row for each ticked item of the sent copy. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS debrief_ticks (
			sent_debrief_id BIGINT UNSIGNED NOT NULL,
			item VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
			ticked_at DATETIME(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
			PRIMARY KEY (sent_debrief_id, item),
			CONSTRAINT debrief_ticks_sent_fk FOREIGN KEY (sent_debrief_id) REFERENCES sent_debriefs (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
