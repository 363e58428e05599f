import type { Knex } from 'knex';
import type { ColumnMapping } from '../../schemas/columnMapping.ts';
import { RequestProblem } from '../http/problem.ts';
import { cancel, enqueue } from '../jobs/jobQueue.ts';
import { importKey } from './importKey.ts';

/**
 * Makes a new reading of a kept file, in the transaction of what makes it necessary; one that is under way for an older reading
 * is called off.
 *
 * @param change what is said of the columns from now on; absent: as before
 * @throws {RequestProblem} `conflict` while its bytes still come in, or it is an archive
 */
export async function readAgain(
	trx: Knex.Transaction,
	id: number,
	change: { mapping?: ColumnMapping | null } = {}
): Promise<void> {
	const row = await trx('uploads')
		.where({ id, kind: 'file' })
		.whereNot({ state: 'receiving' })
		.whereNull('deleted_at')
		.forUpdate()
		.first<{ revision: number } | undefined>('revision');
	if (!row) throw new RequestProblem(409, 'conflict', 'the file requires to be here whole before it is read again');
	await cancel(trx, importKey(id, row.revision));
	const revision = row.revision + 1;
	await trx('uploads')
		.where({ id })
		.update({
			revision,
			state: 'stored',
			stage: 'waiting',
			progress: 0,
			rows_read: null,
			error: null,
			...(change.mapping !== undefined && {
				mapping: change.mapping && JSON.stringify(change.mapping),
				remembered_mapping_used: false
			})
		});
	await enqueue(trx, 'importRun', { uploadId: id, revision }, { uniqueKey: importKey(id, revision) });
}
