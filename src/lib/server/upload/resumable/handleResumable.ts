import { EVENTS, Server, type Upload } from '@tus/server';
import type { Knex } from 'knex';
import { keptPeople } from '../../access/seenRuns.ts';
import type { Viewer } from '../../access/viewer.ts';
import { database } from '../../db/database.ts';
import { decodePublicId, encodePublicId, newPublicId } from '../../db/publicId.ts';
import { environment } from '../../environment.ts';
import { notFound } from '../../http/notFound.ts';
import { problemResponse } from '../../http/problem.ts';
import { faultOf, logger } from '../../logger.ts';
import type { ProblemCode } from '../../../schemas/api.ts';
import { rawStore, storageKeyOf } from '../../storage/store.ts';
import { cleanName, countUpload, problemOfWrite } from '../receiveUpload.ts';
import type { Settled } from '../settleReceived.ts';
import { RESUMABLE_PATH } from './askToComeBack.ts';
import { finishResumable, RESUMABLE_COLUMNS, type ResumableRow } from './finishResumable.ts';
import { PartStore } from './partStore.ts';
import { SharedLocker } from './sharedLocker.ts';

/** How often a file that comes in says how far it is. */
const REPORT_EVERY_MS = 1_000;

/**
 * Answers one request of the tus protocol, version 1.0.0, in the viewer's name. The id in the address is the upload's public id.
 * Pieces may go to any node, in any order of nodes, after any break.
 *
 * @param uploadId null where a new upload is made
 * @throws {RequestProblem} `throttled`, `file_too_large`, `unavailable`
 * @throws 404 when there is no such upload, or it is not the viewer's to go on with
 */
export async function handleResumable(viewer: Viewer, request: Request, uploadId: string | null): Promise<Response> {
	const db = database();
	const row = uploadId === null ? null : await getResumable(db, viewer, uploadId);
	let fault: unknown;
	let settled: Settled | null = null;
	const catching = async <T>(work: () => Promise<T>): Promise<T> => {
		try {
			return await work();
		} catch (error) {
			fault = error;
			throw error;
		}
	};
	const server = new Server({
		path: RESUMABLE_PATH,
		datastore: new PartStore(db),
		locker: new SharedLocker(db),
		maxSize: environment().KERBNOTE_UPLOAD_LIMIT_BYTES,
		relativeLocation: true,
		allowedOrigins: [],
		postReceiveInterval: REPORT_EVERY_MS,
		disableTerminationForFinishedUploads: true,
		namingFunction: () => encodePublicId(newPublicId()),
		onUploadCreate: (_request, upload) => catching(() => createRow(db, viewer, upload)),
		onUploadFinish: (_request, upload) =>
			catching(async () => {
				const whole = await getResumable(db, viewer, upload.id);
				settled = await finishResumable(db, rawStore(), whole);
				return settled ? { headers: headersOf(settled) } : {};
			})
	});
	server.on(EVENTS.POST_RECEIVE, (_request, upload) => void report(db, upload));
	const response = await server.handleWeb(request);
	if (fault) throw problemOfWrite(fault);
	if (response.status >= 400) return problemOfTus(response);
	if (row && request.method === 'HEAD' && isAllHere(response)) {
		// Its last piece may have come in just before a node died.
		settled = await finishResumable(db, rawStore(), row);
		for (const [name, value] of Object.entries(settled ? headersOf(settled) : {})) response.headers.set(name, value);
	}
	return response;
}

/** An upload that the viewer may go on with: their own, or of a minor in their care. */
async function getResumable(db: Knex, viewer: Viewer, uploadId: string): Promise<ResumableRow> {
	const publicId = decodePublicId(uploadId) ?? notFound();
	const kept = await keptPeople(db, viewer);
	const row = await db('uploads')
		.where({ public_id: publicId, is_resumable: true })
		.whereIn('owner_id', kept)
		.where((there) => there.whereNull('deleted_at').orWhereNotNull('same_as_id'))
		.first<ResumableRow | undefined>([...RESUMABLE_COLUMNS]);
	return row ?? notFound();
}

/** The row comes before the first byte, so that nothing is on disk that no row speaks of. */
async function createRow(db: Knex, viewer: Viewer, upload: Upload): Promise<{ metadata?: Upload['metadata'] }> {
	await countUpload(db, viewer);
	const fileName = cleanName(upload.metadata?.filename ?? upload.metadata?.name ?? '');
	await db('uploads').insert({
		public_id: decodePublicId(upload.id),
		owner_id: viewer.personId,
		uploaded_by: viewer.personId,
		file_name: fileName,
		storage_key: storageKeyOf(upload.id),
		size_bytes: upload.size ?? 0,
		is_resumable: true,
		state: 'receiving'
	});
	return { metadata: { filename: fileName } };
}

/** How far a file is, for other tabs and for the sweep; a line that is lost does no harm. */
async function report(db: Knex, { id, offset }: Upload): Promise<void> {
	try {
		await db('uploads')
			.where({ public_id: decodePublicId(id), state: 'receiving' })
			.update({ received_bytes: offset });
	} catch (error) {
		logger.debug(faultOf(error), 'progress of an upload was not written');
	}
}

function headersOf({ id, sameFile }: Settled): Record<string, string> {
	return { 'Kerbnote-Upload': id, ...(sameFile && { 'Kerbnote-Same-File': 'true' }) };
}

function isAllHere({ headers }: Response): boolean {
	const length = headers.get('upload-length');
	return length !== null && length === headers.get('upload-offset');
}

const CODES: Record<number, ProblemCode> = {
	404: 'not_found',
	409: 'conflict',
	410: 'not_found',
	413: 'file_too_large',
	500: 'upload_interrupted'
};

/** The protocol's own refusals, in the form of all others; the status and the protocol's headers stay. */
async function problemOfTus(response: Response): Promise<Response> {
	const { status, headers } = response;
	const kept: Record<string, string> = {};
	for (const name of ['tus-resumable', 'upload-offset', 'connection']) {
		const value = headers.get(name);
		if (value !== null) kept[name] = value;
	}
	const limitMb = Math.floor(environment().KERBNOTE_UPLOAD_LIMIT_BYTES / 1024 / 1024);
	const detail = status === 413 ? `a file requires at most ${limitMb} MB` : (await response.text()).trim();
	const remedy = status === 413 ? 'Cut the recording into runs, or compress it with gzip' : 'Send it again';
	return problemResponse({ status, code: CODES[status] ?? 'invalid_input', detail, remedy }, kept);
}
