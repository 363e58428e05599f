import type { Knex } from 'knex';
import { CODE_VERSION } from '../importing/storeRun.ts';
import { importKey } from '../upload/importKey.ts';
import { enqueue } from './jobQueue.ts';

/** So many at a time: what a person hands over meanwhile waits behind no more than these. */
const AT_ONCE = 8;

/**
 * Queues files that an earlier version of the analysis read last. The new reading takes the place of the old one in one
 * transaction; until then, and where it fails, the old one stays.
 *
 * @returns how many were queued; 0 when all is read by this version
 */
export async function queueOlderReadings(db: Knex): Promise<number> {
	const rows = await db('uploads')
		.where({ state: 'analysed', kind: 'file' })
		.where((old) => old.whereNull('analysed_with').orWhereNot('analysed_with', CODE_VERSION))
		.whereNull('deleted_at')
		.orderBy('id', 'desc')
		.limit(AT_ONCE)
		.select<{ id: number; revision: number }[]>('id', 'revision');
	for (const { id, revision } of rows) {
		const job = { uploadId: id, revision, cause: 'version' as const };
		await enqueue(db, 'importRun', job, { uniqueKey: importKey(id, revision) });
	}
	return rows.length;
}
