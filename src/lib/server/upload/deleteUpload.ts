import type { Knex } from 'knex';
import type { UploadHead } from '../../schemas/views.ts';
import { keptUploads } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { recordAudit } from '../db/auditRepository.ts';
import { database } from '../db/database.ts';
import { decodePublicId } from '../db/publicId.ts';
import { isDuplicate, retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { findUpload, foundUploadRows, listFoundUploads, listRunIds, toUploadHead } from '../db/uploadRepository.ts';
import { notFound } from '../http/notFound.ts';
import { RequestProblem } from '../http/problem.ts';
import { cancel, enqueue } from '../jobs/jobQueue.ts';
import { importKey } from './importKey.ts';

/** What was deleted can be brought back for this long; then the sweep removes it for good. */
export const UNDO_DAYS = 30;

/**
 * Takes an upload and its runs out of sight and calls off an import that is under way; an upload that is still coming in goes
 * for good with the next sweep, as one that was abandoned.
 *
 * @throws 404 when there is no such upload, or it is not the viewer's
 */
export async function deleteUpload(viewer: Viewer, uploadId: string): Promise<void> {
	const db = database();
	const upload = (await findUpload(db, viewer, uploadId)) ?? notFound();
	await retryOnDeadlock(db, async (trx) => {
		const row = await trx('uploads')
			.where({ id: upload.id })
			.forUpdate()
			.first<{ revision: number } | undefined>('revision');
		if (!row) return;
		const at = await timeOf(trx);
		await trx('uploads').where({ id: upload.id }).update({ deleted_at: at, content_key: null });
		await trx('runs').where({ upload_id: upload.id }).whereNull('deleted_at').update({ deleted_at: at });
		await cancel(trx, importKey(upload.id, row.revision));
		await recordAudit(trx, {
			actorId: viewer.personId,
			action: 'upload_deleted',
			subject: { kind: 'upload', id: uploadId }
		});
	});
}

/**
 * Brings back an upload with the runs that went with it; a reading that was called off begins again.
 *
 * @throws 404 when there is nothing to bring back; {RequestProblem} `conflict` when the same file was handed over again since
 */
export async function restoreUpload(viewer: Viewer, uploadId: string): Promise<UploadHead> {
	const db = database();
	const publicId = decodePublicId(uploadId) ?? notFound();
	const [upload] = await listFoundUploads(
		foundUploadRows(db)
			.where('uploads.public_id', publicId)
			.whereNull('uploads.same_as_id')
			.where(keptUploads(db, viewer))
	);
	if (!upload) notFound();
	try {
		await retryOnDeadlock(db, (trx) => restore(trx, upload.id));
	} catch (error) {
		if (!isDuplicate(error)) throw error;
		throw new RequestProblem(409, 'conflict', 'the same file was handed over again since', {
			remedy: 'Open the newer upload'
		});
	}
	const after = (await findUpload(db, viewer, uploadId)) ?? notFound();
	const runIds = await listRunIds(db, [after.id]);
	return toUploadHead(after, runIds.get(after.id) ?? []);
}

async function restore(trx: Knex.Transaction, id: number): Promise<void> {
	const row = await trx('uploads')
		.where({ id })
		.forUpdate()
		.first<{ deleted_at: Date | null; state: string; revision: number } | undefined>('deleted_at', 'state', 'revision');
	if (!row?.deleted_at) return;
	await trx('runs').where({ upload_id: id, deleted_at: row.deleted_at }).update({ deleted_at: null });
	await trx('uploads')
		.where({ id })
		.update({ deleted_at: null, content_key: row.state === 'receiving' ? null : trx.ref('sha256') });
	if (row.state !== 'stored' && row.state !== 'reading') return;
	await enqueue(trx, 'importRun', { uploadId: id, revision: row.revision }, { uniqueKey: importKey(id, row.revision) });
}

/** One moment for all rows, by which they are known to belong together. */
async function timeOf(trx: Knex.Transaction): Promise<Date> {
	const [[{ now }]] = await trx.raw('SELECT CURRENT_TIMESTAMP(3) AS now');
	return now;
}
