import type { Knex } from 'knex';
import type { Viewer } from '../access/viewer.ts';
import { mayUpload } from '../auth/throttle.ts';
import { database } from '../db/database.ts';
import { encodePublicId, newPublicId } from '../db/publicId.ts';
import { environment } from '../environment.ts';
import { RequestProblem } from '../http/problem.ts';
import { FileTooLarge, type KeptFile } from '../storage/rawStore.ts';
import { rawStore, storageKeyOf } from '../storage/store.ts';
import { settleReceived, type Settled } from './settleReceived.ts';

const LONGEST_NAME = 255;

/**
 * Keeps a raw file and queues its import. The row comes first and says "receiving", so that nothing is on disk that no row
 * speaks of; the file's name and the job come with one transaction, so that a kept file is always worked on.
 *
 * @param fileName as the browser says it; only its last part is kept
 * @param body the bytes, in chunks; gzip is kept as it came
 * @returns the upload's public id, that of an earlier upload where the person had handed over the same file before
 * @throws {RequestProblem} `throttled`, `file_too_large`, `upload_interrupted`, `unavailable`; nothing is kept then
 */
export async function receiveUpload(
	viewer: Viewer,
	fileName: string,
	body: AsyncIterable<Uint8Array>
): Promise<Settled> {
	const db = database();
	await countUpload(db, viewer);
	const publicId = newPublicId();
	const storageKey = storageKeyOf(encodePublicId(publicId));
	const [uploadId]: number[] = await db('uploads').insert({
		public_id: publicId,
		owner_id: viewer.personId,
		uploaded_by: viewer.personId,
		file_name: cleanName(fileName),
		storage_key: storageKey,
		state: 'receiving'
	});
	let kept: KeptFile;
	try {
		kept = await rawStore().write(storageKey, body, environment().KERBNOTE_UPLOAD_LIMIT_BYTES);
	} catch (error) {
		await db('uploads').where({ id: uploadId }).delete();
		throw problemOfWrite(error);
	}
	return await settleReceived(db, rawStore(), { id: uploadId, publicId, ownerId: viewer.personId, storageKey }, kept);
}

/** The last part of a path, without characters that steer a terminal or a header. */
export function cleanName(fileName: string): string {
	const last = fileName.normalize('NFC').split(/[/\\]/).pop() ?? '';
	const clean = last.replaceAll(/\p{Cc}|\p{Cf}/gu, '').trim();
	return [...clean].slice(0, LONGEST_NAME).join('') || 'run.csv';
}

/**
 * Counts an upload of a person.
 *
 * @throws {RequestProblem} `throttled` beyond what one person hands over
 */
export async function countUpload(db: Knex, viewer: Viewer): Promise<void> {
	if (await mayUpload(db, viewer.personId)) return;
	throw new RequestProblem(429, 'throttled', 'an hour holds at most 200 uploads of one person', {
		remedy: 'Wait a while, then hand over the rest'
	});
}

/** What a person can do about it that a file could not be kept; anything else stays what it is. */
export function problemOfWrite(error: unknown): unknown {
	if (error instanceof FileTooLarge) {
		const limitMb = Math.floor(error.limitBytes / 1024 / 1024);
		return new RequestProblem(413, 'file_too_large', `a file requires at most ${limitMb} MB`, {
			remedy: 'Cut the recording into runs, or compress it with gzip'
		});
	}
	if (error instanceof Error && 'code' in error && typeof error.code === 'string') {
		if (error.code === 'ENOSPC' || error.code === 'EDQUOT') {
			return new RequestProblem(503, 'unavailable', 'there is no room for the file at the moment', {
				remedy: 'Try again later'
			});
		}
		if (INTERRUPTED.has(error.code)) {
			return new RequestProblem(400, 'upload_interrupted', 'the file ended before all of it was here', {
				remedy: 'Send it again'
			});
		}
	}
	return error;
}

/** What the way to the browser throws when it goes away in mid-file. */
const INTERRUPTED = new Set(['ECONNRESET', 'ABORT_ERR', 'ERR_STREAM_PREMATURE_CLOSE', 'UND_ERR_ABORTED', 'EPIPE']);
