import type { Knex } from 'knex';

/** Of files that a person had handed over twice before, the first is the one that counts. */
export async function up(knex: Knex): Promise<void> {
	await knex.raw(`
		UPDATE IGNORE uploads SET content_key = sha256, received_bytes = size_bytes
		WHERE content_key IS NULL AND deleted_at IS NULL AND state <> 'receiving' AND sha256 IS NOT NULL
		ORDER BY id
	`);
	await knex.raw(`
		UPDATE uploads SET analysed_with = (
			SELECT MIN(analyses.code_version) FROM runs JOIN analyses ON analyses.id = runs.analysis_id WHERE runs.upload_id = uploads.id)
		WHERE analysed_with IS NULL AND state = 'analysed'
	`);
}
