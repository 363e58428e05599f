import { Readable } from 'node:stream';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { findUpload } from '../db/uploadRepository.ts';
import { notFound } from '../http/notFound.ts';
import { rawStore } from '../storage/store.ts';

/**
 * The raw file of an upload as it was handed over.
 *
 * @throws 404 when there is no such upload, it is not whole yet, or the viewer may not see it
 */
export async function openRawFile(
	viewer: Viewer,
	uploadId: string
): Promise<{ body: ReadableStream<Uint8Array>; fileName: string; sizeBytes: number }> {
	const upload = (await findUpload(database(), viewer, uploadId)) ?? notFound();
	if (upload.state === 'receiving') notFound();
	const file = await rawStore().read(upload.storage_key);
	return {
		body: Readable.toWeb(file) as ReadableStream<Uint8Array>,
		fileName: upload.file_name,
		sizeBytes: upload.size_bytes
	};
}
