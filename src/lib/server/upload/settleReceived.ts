import type { Knex } from 'knex';
import { isDuplicate, retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { encodePublicId } from '../db/publicId.ts';
import { enqueue } from '../jobs/jobQueue.ts';
import type { KeptFile, RawStore } from '../storage/rawStore.ts';
import { importKey } from './importKey.ts';

export interface ReceivedUpload {
	id: number;
	publicId: Buffer;
	ownerId: number;
	storageKey: string;
}

/** Which upload has the bytes now. */
export interface Settled {
	id: string;
	/** the person had handed over the same file before; the new bytes are gone again */
	sameFile: boolean;
}

/**
 * The step from "receiving" to "stored" of a file that lies whole in the raw store: the row and the job come with one transaction,
 * so that a kept file is always worked on. The same file of the same person is there once: the second row then only says which
 * upload has the bytes. May be called again after any failure.
 */
export async function settleReceived(
	db: Knex,
	store: RawStore,
	received: ReceivedUpload,
	kept: KeptFile
): Promise<Settled> {
	const earlier = await settleOnce(db, received, kept).catch((error: unknown) => {
		// Two of the same file ended at the same moment: the other one is there by now.
		if (isDuplicate(error)) return settleOnce(db, received, kept);
		throw error;
	});
	if (!earlier) return { id: encodePublicId(received.publicId), sameFile: false };
	await store.remove(received.storageKey);
	return { id: encodePublicId(earlier), sameFile: true };
}

async function settleOnce(db: Knex, received: ReceivedUpload, kept: KeptFile): Promise<Buffer | null> {
	return await retryOnDeadlock(db, (trx) => settleInTransaction(trx, received, kept));
}

/**
 * The same as part of a larger step; the caller removes the bytes where they were here before.
 *
 * @returns public id of the upload that had the file before; null where this is the first
 */
export async function settleInTransaction(
	trx: Knex.Transaction,
	received: ReceivedUpload,
	kept: KeptFile
): Promise<Buffer | null> {
	const row = await trx('uploads')
		.where({ id: received.id })
		.forUpdate()
		.first<{ state: string; same_as_id: number | null; deleted_at: Date | null } | undefined>(
			'state',
			'same_as_id',
			'deleted_at'
		);
	if (!row) return null;
	if (row.same_as_id !== null) return await publicIdOf(trx, row.same_as_id);
	if (row.state !== 'receiving') return null;
	const about = { size_bytes: kept.sizeBytes, received_bytes: kept.sizeBytes, sha256: kept.sha256 };
	const earlier = await trx('uploads')
		.where({ owner_id: received.ownerId, content_key: kept.sha256 })
		.first<{ id: number; public_id: Buffer } | undefined>('id', 'public_id');
	if (earlier) {
		await trx('uploads')
			.where({ id: received.id })
			.update({
				...about,
				state: 'stored',
				stage: 'done',
				same_as_id: earlier.id,
				deleted_at: trx.raw('CURRENT_TIMESTAMP(3)')
			});
		return earlier.public_id;
	}
	await trx('uploads')
		.where({ id: received.id })
		.update({
			...about,
			state: 'stored',
			// One that was deleted while it came in must not stand in the way of the same file.
			content_key: row.deleted_at ? null : kept.sha256,
			stored_at: trx.raw('CURRENT_TIMESTAMP(3)')
		});
	const job = { uploadId: received.id, revision: 1 };
	await enqueue(trx, 'importRun', job, { uniqueKey: importKey(received.id, 1) });
	return null;
}

async function publicIdOf(trx: Knex.Transaction, id: number): Promise<Buffer | null> {
	const row = await trx('uploads').where({ id }).first<{ public_id: Buffer } | undefined>('public_id');
	return row?.public_id ?? null;
}
