import type { Knex } from 'knex';
import { encodePublicId } from '../../db/publicId.ts';
import type { KeptFile, RawStore } from '../../storage/rawStore.ts';
import { settleReceived, type Settled } from '../settleReceived.ts';
import { partPath, partSize } from './partStore.ts';
import { SharedLocker } from './sharedLocker.ts';

export interface ResumableRow {
	id: number;
	public_id: Buffer;
	owner_id: number;
	storage_key: string;
	size_bytes: number;
	state: string;
}
export const RESUMABLE_COLUMNS = ['id', 'public_id', 'owner_id', 'storage_key', 'size_bytes', 'state'] as const;

/**
 * Moves a file whose last piece has come in to the raw store and queues its import. May be called again after any failure, by any
 * node: what was done already is found done.
 *
 * @returns null while pieces are missing
 */
export async function finishResumable(db: Knex, store: RawStore, row: ResumableRow): Promise<Settled | null> {
	const id = encodePublicId(row.public_id);
	const lock = new SharedLocker(db).newLock(id);
	await lock.lock(new AbortController().signal, () => {});
	try {
		const received = { id: row.id, publicId: row.public_id, ownerId: row.owner_id, storageKey: row.storage_key };
		const now = await db('uploads').where({ id: row.id }).first<{ state: string } | undefined>('state');
		if (!now) return null;
		if (now.state !== 'receiving') return await settleReceived(db, store, received, NOTHING_NEW);
		const isWhole = (await partSize(id)) === row.size_bytes;
		// Where no part is left, the move may have ended and what came after it had not.
		const kept = isWhole
			? await store.adopt(row.storage_key, partPath(id))
			: await measureWhole(store, row.storage_key, row.size_bytes);
		return kept && (await settleReceived(db, store, received, kept));
	} finally {
		await lock.unlock();
	}
}

/** For a row that was settled before: nothing of it is written. */
const NOTHING_NEW: KeptFile = { sizeBytes: 0, sha256: Buffer.alloc(32) };

async function measureWhole(store: RawStore, key: string, sizeBytes: number): Promise<KeptFile | null> {
	const kept = await store.measure(key);
	return kept?.sizeBytes === sizeBytes ? kept : null;
}
