import type { Knex } from 'knex';

/** One channel of one lap on the path's 1 m grid: whole numbers at the sensor's resolution, second difference, zigzag varint, deflate. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		CREATE TABLE IF NOT EXISTS lap_traces (
			lap_id BIGINT UNSIGNED NOT NULL,
			channel VARCHAR(24) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
			version TINYINT UNSIGNED NOT NULL,
			scale DOUBLE NOT NULL,
			payload MEDIUMBLOB NOT NULL,
			PRIMARY KEY (lap_id, channel),
			CONSTRAINT lap_traces_lap_id_fk FOREIGN KEY (lap_id) REFERENCES laps (id) ON DELETE CASCADE
		) ENGINE=InnoDB DEFAULT CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_520_ci
	`);
}
