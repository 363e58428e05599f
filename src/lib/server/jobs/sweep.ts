import type { Knex } from 'knex';
import { sweepThrottle } from '../auth/throttle.ts';
import { decodePublicId } from '../db/publicId.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import type { RawStore } from '../storage/rawStore.ts';
import { storageKeyOf } from '../storage/store.ts';
import { importKey } from '../upload/importKey.ts';
import { enqueue } from './jobQueue.ts';

/** Longer than any upload takes: 500 MB at 20 kB/s. */
const GIVEN_UP_AFTER_H = 8;
/** Finished jobs and dead sessions are looked at for this long. */
const KEPT_DAYS = 30;

/**
 * Puts right what a process left when it was stopped in mid-upload: a row whose file is whole goes on to its import, a row
 * without a file goes, a file without a row goes. Also removes what ran out.
 */
export async function sweep(db: Knex, store: RawStore, now: Date): Promise<void> {
	await settleUnfinished(db, store);
	await removeStrays(db, store, now);
	await sweepThrottle(db);
	await db('jobs')
		.whereIn('status', ['done', 'cancelled'])
		.where('finished_at', '<', daysAgo(db))
		.limit(10_000)
		.delete();
	await db('sign_in_sessions').where('expires_at', '<', daysAgo(db)).limit(10_000).delete();
}

const daysAgo = (db: Knex) => db.raw('CURRENT_TIMESTAMP(3) - INTERVAL ? DAY', [KEPT_DAYS]);

async function settleUnfinished(db: Knex, store: RawStore): Promise<void> {
	const rows = await db('uploads')
		.where({ state: 'receiving' })
		.where('created_at', '<', db.raw('CURRENT_TIMESTAMP(3) - INTERVAL ? HOUR', [GIVEN_UP_AFTER_H]))
		.limit(1000)
		.select<{ id: number; storage_key: string }[]>('id', 'storage_key');
	for (const { id, storage_key } of rows) {
		const kept = await store.measure(storage_key);
		if (!kept) {
			await db('uploads').where({ id, state: 'receiving' }).delete();
			continue;
		}
		await retryOnDeadlock(db, async (trx) => {
			const settled = await trx('uploads')
				.where({ id, state: 'receiving' })
				.update({
					state: 'stored',
					size_bytes: kept.sizeBytes,
					sha256: kept.sha256,
					stored_at: trx.raw('CURRENT_TIMESTAMP(3)')
				});
			if (settled === 1)
				await enqueue(trx, 'importRun', { uploadId: id, revision: 1 }, { uniqueKey: importKey(id, 1) });
		});
	}
}

async function removeStrays(db: Knex, store: RawStore, now: Date): Promise<void> {
	const before = new Date(now.getTime() - GIVEN_UP_AFTER_H * 3_600_000);
	for await (const { key, whole } of store.list(before)) {
		if (!whole) {
			await store.removePart(key);
			continue;
		}
		const id = key.slice(key.indexOf('/') + 1);
		const publicId = decodePublicId(id);
		// What is not named like an upload was not put there by us.
		if (!publicId || storageKeyOf(id) !== key) continue;
		const row: unknown = await db('uploads').where({ public_id: publicId }).first('id');
		if (!row) await store.remove(key);
	}
}
