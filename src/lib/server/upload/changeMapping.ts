import type { ColumnMapping } from '../../schemas/columnMapping.ts';
import type { UploadHead } from '../../schemas/views.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { findUpload, listRunIds, toUploadHead } from '../db/uploadRepository.ts';
import { notFound } from '../http/notFound.ts';
import { RequestProblem } from '../http/problem.ts';
import { enqueue } from '../jobs/jobQueue.ts';
import { importKey } from './importKey.ts';

/**
 * Reads the kept file again as the person says. The earlier reading stays to be seen until the new one takes its place; an import
 * that is still under way for an older reading stores nothing.
 *
 * @param mapping null: as the product understands it by itself
 * @throws 404 when the viewer may not see the upload; {RequestProblem} `conflict` while its bytes still come in
 */
export async function changeMapping(
	viewer: Viewer,
	uploadId: string,
	mapping: ColumnMapping | null
): Promise<UploadHead> {
	const db = database();
	const upload = (await findUpload(db, viewer, uploadId)) ?? notFound();
	await retryOnDeadlock(db, async (trx) => {
		const row = await trx('uploads')
			.where({ id: upload.id })
			.whereNot({ state: 'receiving' })
			.whereNull('deleted_at')
			.forUpdate()
			.first<{ revision: number } | undefined>('revision');
		if (!row) throw new RequestProblem(409, 'conflict', 'the file requires to be here whole before it is read again');
		const revision = row.revision + 1;
		await trx('uploads')
			.where({ id: upload.id })
			.update({
				revision,
				mapping: mapping && JSON.stringify(mapping),
				state: 'stored',
				stage: 'waiting',
				progress: 0,
				error: null
			});
		await enqueue(trx, 'importRun', { uploadId: upload.id, revision }, { uniqueKey: importKey(upload.id, revision) });
	});
	const [after, runIds] = await Promise.all([findUpload(db, viewer, uploadId), listRunIds(db, [upload.id])]);
	return toUploadHead(after ?? notFound(), runIds.get(upload.id) ?? []);
}
