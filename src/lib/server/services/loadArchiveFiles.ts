import type { Knex } from 'knex';
import type { ArchiveFile, UploadState } from '../../schemas/views.ts';
import { decodePublicId, encodePublicId } from '../db/publicId.ts';
import type { StoredArchiveFile } from '../db/uploadRepository.ts';

/** What became of each file that an archive held. Whoever may see the archive may see them: they have one owner. */
export async function loadArchiveFiles(db: Knex, stored: readonly StoredArchiveFile[]): Promise<ArchiveFile[]> {
	const ids = stored.flatMap(({ upload }) => (upload === null ? [] : (decodePublicId(upload) ?? [])));
	if (ids.length === 0) return stored.map(({ name, knownBefore }) => ({ name, upload: null, knownBefore }));
	const rows = await db('uploads')
		.whereIn('public_id', ids)
		.whereNull('deleted_at')
		.select<{ public_id: Buffer; state: UploadState }[]>('public_id', 'state');
	const states = new Map(rows.map(({ public_id, state }) => [encodePublicId(public_id), state]));
	return stored.map(({ name, upload, knownBefore }) => {
		const state = upload === null ? undefined : states.get(upload);
		return { name, upload: upload !== null && state ? { id: upload, state } : null, knownBefore };
	});
}
