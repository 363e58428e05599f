import type { MappingInput } from '../../schemas/api.ts';
import type { ColumnMapping } from '../../schemas/columnMapping.ts';
import type { UploadHead } from '../../schemas/views.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { findUpload, listRunIds, toUploadHead } from '../db/uploadRepository.ts';
import { notFound } from '../http/notFound.ts';
import { RequestProblem } from '../http/problem.ts';
import { readAgain } from './readAgain.ts';
import { findRemembered, remember } from './rememberedMappings.ts';

/**
 * Reads the kept file again as the person says. The earlier reading stays to be seen until the new one takes its place; an import
 * that is still under way for an older reading stores nothing.
 *
 * @param mapping null: as the product understands it by itself
 * @param keep for whom the answer is kept, for files with the same header
 * @throws 404 when the viewer may not see the upload; {RequestProblem} `conflict` while its bytes still come in
 */
export async function changeMapping(
	viewer: Viewer,
	uploadId: string,
	mapping: ColumnMapping | null,
	keep: Omit<MappingInput, 'mapping'> = {}
): Promise<UploadHead> {
	const db = database();
	const upload = (await findUpload(db, viewer, uploadId)) ?? notFound();
	await retryOnDeadlock(db, async (trx) => {
		await readAgain(trx, upload.id, { mapping });
		const row = await trx('uploads')
			.where({ id: upload.id })
			.first<{ header_key: Buffer | null } | undefined>('header_key');
		if (row?.header_key) {
			await remember(trx, viewer, upload.owner_id, row.header_key, { ...keep, mapping });
		} else if (keep.remember === 'me' || keep.remember === 'organisation') {
			throw new RequestProblem(409, 'conflict', 'the answer requires a file whose header was read', {
				remedy: 'Answer for this file only'
			});
		}
	});
	return await headOf(viewer, uploadId);
}

/**
 * Reads the kept file again, with what is said of its columns now.
 *
 * @throws as `changeMapping`
 */
export async function analyseAgain(viewer: Viewer, uploadId: string): Promise<UploadHead> {
	const db = database();
	const upload = (await findUpload(db, viewer, uploadId)) ?? notFound();
	await retryOnDeadlock(db, (trx) => readAgain(trx, upload.id));
	return await headOf(viewer, uploadId);
}

/**
 * Forgets the answer that is kept for files with this one's header; what was read by it stays as it is.
 *
 * @throws 404 when the viewer may not see the upload, nothing is kept, or it is not theirs to forget
 */
export async function forgetMapping(viewer: Viewer, uploadId: string): Promise<void> {
	const db = database();
	const upload = (await findUpload(db, viewer, uploadId)) ?? notFound();
	const row = await db('uploads')
		.where({ id: upload.id })
		.first<{ header_key: Buffer | null } | undefined>('header_key');
	if (!row?.header_key) notFound();
	const kept = await findRemembered(db, { ...viewer, personId: upload.owner_id }, row.header_key);
	if (!kept?.mayForget) notFound();
	await db('remembered_mappings').where({ id: kept.id }).delete();
}

async function headOf(viewer: Viewer, uploadId: string): Promise<UploadHead> {
	const db = database();
	const upload = (await findUpload(db, viewer, uploadId)) ?? notFound();
	const runIds = await listRunIds(db, [upload.id]);
	return toUploadHead(upload, runIds.get(upload.id) ?? []);
}
