import { rm } from 'node:fs/promises';
import type { Knex } from 'knex';
import { decodePublicId, encodePublicId } from '../db/publicId.ts';
import type { RawStore } from '../storage/rawStore.ts';
import { finishResumable, RESUMABLE_COLUMNS, type ResumableRow } from '../upload/resumable/finishResumable.ts';
import { listParts, partPath } from '../upload/resumable/partStore.ts';

/** A phone comes back from a weekend without a network; then the pieces go. */
export const ABANDONED_AFTER_H = 72;
/** A node that is finishing a file right now needs less. */
const LEFT_ALONE_S = 60;
/** A row is there before its part; of a part without a row nobody knows after this long. */
const STRAY_AFTER_MS = 3_600_000;

/**
 * Files in pieces: finishes those whose last piece came in just before a node died, gives those up that nobody has gone on with,
 * and removes pieces that no row speaks of.
 */
export async function sweepResumable(db: Knex, store: RawStore, now: Date): Promise<void> {
	const rows = await db('uploads')
		.where({ state: 'receiving', is_resumable: true })
		.where('updated_at', '<', db.raw('CURRENT_TIMESTAMP(3) - INTERVAL ? SECOND', [LEFT_ALONE_S]))
		.limit(1000)
		.select<(ResumableRow & { deleted_at: Date | null; is_abandoned: number })[]>(
			...RESUMABLE_COLUMNS,
			'deleted_at',
			db.raw('deleted_at IS NOT NULL OR updated_at < CURRENT_TIMESTAMP(3) - INTERVAL ? HOUR AS is_abandoned', [
				ABANDONED_AFTER_H
			])
		);
	for (const row of rows) {
		if (row.deleted_at === null && (await finishResumable(db, store, row))) continue;
		if (row.is_abandoned === 1) await giveUp(db, row);
	}
	for (const id of await listParts(new Date(now.getTime() - STRAY_AFTER_MS))) {
		const row: unknown = await db('uploads')
			.where({ public_id: decodePublicId(id), state: 'receiving' })
			.first('id');
		if (!row) await rm(partPath(id), { force: true });
	}
}

async function giveUp(db: Knex, row: ResumableRow): Promise<void> {
	await db('uploads').where({ id: row.id, state: 'receiving' }).delete();
	await rm(partPath(encodePublicId(row.public_id)), { force: true });
}
