import type { Knex } from 'knex';

/** What a coach said of a run in the in-tray: by when they promised a debrief, or that there is nothing to say. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS in_tray_marks (
			coach_id BIGINT UNSIGNED NOT NULL,
			run_id BIGINT UNSIGNED NOT NULL,
			promised_at DATETIME(3) NULL,
			closed_at DATETIME(3) NULL,
			PRIMARY KEY (coach_id, run_id),
			KEY in_tray_marks_run (run_id),
			CONSTRAINT in_tray_marks_coach_fk FOREIGN KEY (coach_id) REFERENCES people (id) ON DELETE CASCADE,
			CONSTRAINT in_tray_marks_run_fk FOREIGN KEY (run_id) REFERENCES runs (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
