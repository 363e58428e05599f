import type { Knex } from 'knex';
import { sweepThrottle } from '../auth/throttle.ts';
import { removeUnusedLayout } from '../db/layoutRepository.ts';
import { decodePublicId } from '../db/publicId.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { sweepMail } from '../mail/sweepMail.ts';
import { sweepGuardianRequests } from '../services/invitations/guardianRequests.ts';
import type { RawStore } from '../storage/rawStore.ts';
import { storageKeyOf } from '../storage/store.ts';
import { UNDO_DAYS } from '../upload/deleteUpload.ts';
import { settleReceived } from '../upload/settleReceived.ts';
import { sweepResumable } from './sweepResumable.ts';

/** Longer than any upload in one piece takes: 500 MB at 20 kB/s. */
const GIVEN_UP_AFTER_H = 8;
/** Finished jobs and dead sessions are looked at for this long. */
const KEPT_DAYS = 30;

/**
 * Puts right what a process left when it was stopped in mid-upload: a row whose file is whole goes on to its import, a row
 * without a file goes, a file without a row goes. Also removes what ran out, and what was deleted long enough ago.
 */
export async function sweep(db: Knex, store: RawStore, now: Date): Promise<void> {
	await sweepResumable(db, store, now);
	await settleUnfinished(db, store);
	await removeDeleted(db, store);
	await removeStrays(db, store, now);
	await sweepThrottle(db);
	await sweepMail(db);
	await sweepGuardianRequests(db);
	await db('jobs')
		.whereIn('status', ['done', 'cancelled'])
		.where('finished_at', '<', daysAgo(db, KEPT_DAYS))
		.limit(10_000)
		.delete();
	await db('sign_in_sessions').where('expires_at', '<', daysAgo(db, KEPT_DAYS)).limit(10_000).delete();
	await db('locks').where('expires_at', '<', daysAgo(db, 1)).whereNot({ holder: '' }).limit(10_000).delete();
}

const daysAgo = (db: Knex, days: number) => db.raw('CURRENT_TIMESTAMP(3) - INTERVAL ? DAY', [days]);

async function settleUnfinished(db: Knex, store: RawStore): Promise<void> {
	const rows = await db('uploads')
		.where({ state: 'receiving', is_resumable: false })
		.where('created_at', '<', db.raw('CURRENT_TIMESTAMP(3) - INTERVAL ? HOUR', [GIVEN_UP_AFTER_H]))
		.limit(1000)
		.select<{ id: number; public_id: Buffer; owner_id: number; storage_key: string; parent_id: number | null }[]>(
			'id',
			'public_id',
			'owner_id',
			'storage_key',
			'parent_id'
		);
	for (const { id, public_id, owner_id, storage_key, parent_id } of rows) {
		// A table of an archive counts with its archive or not at all.
		const kept = parent_id === null ? await store.measure(storage_key) : null;
		if (!kept) {
			await db('uploads').where({ id, state: 'receiving' }).delete();
			continue;
		}
		await settleReceived(db, store, { id, publicId: public_id, ownerId: owner_id, storageKey: storage_key }, kept);
	}
}

/** Rows first: a file without a row is found by the next sweep, a row without a file would be a lie. */
async function removeDeleted(db: Knex, store: RawStore): Promise<void> {
	const uploads = await db('uploads')
		.where('deleted_at', '<', daysAgo(db, UNDO_DAYS))
		.limit(1000)
		.select<{ id: number; storage_key: string }[]>('id', 'storage_key');
	for (const { id, storage_key } of uploads) {
		await retryOnDeadlock(db, async (trx) => {
			const runs = await trx('runs')
				.where({ upload_id: id })
				.select<{ id: number; layout_id: number }[]>('id', 'layout_id');
			await removeRuns(trx, runs);
			await trx('uploads').where({ id }).delete();
		});
		await store.remove(storage_key);
	}
	const runs = await db('runs')
		.where('deleted_at', '<', daysAgo(db, UNDO_DAYS))
		.whereNull('upload_id')
		.limit(1000)
		.select<{ id: number; layout_id: number }[]>('id', 'layout_id');
	for (const run of runs) await retryOnDeadlock(db, (trx) => removeRuns(trx, [run]));
}

async function removeRuns(trx: Knex.Transaction, runs: readonly { id: number; layout_id: number }[]): Promise<void> {
	for (const { id } of runs) await trx('runs').where({ id }).delete();
	for (const layoutId of new Set(runs.map(({ layout_id }) => layout_id))) await removeUnusedLayout(trx, layoutId);
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
		const row: unknown = await db('uploads').where({ public_id: publicId }).whereNull('same_as_id').first('id');
		if (!row) await store.remove(key);
	}
}
