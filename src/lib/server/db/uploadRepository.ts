import type { Knex } from 'knex';
import { z } from 'zod';
import { errorDocumentSchema, sourceSchema } from '../../schemas/analysisDocument.ts';
import { columnMappingSchema } from '../../schemas/columnMapping.ts';
import { publicIdSchema, uploadStageSchema, uploadStateSchema, type UploadHead } from '../../schemas/views.ts';
import { seenUploads } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { decodePublicId, encodePublicId } from './publicId.ts';

const rowSchema = z.object({
	id: z.number(),
	public_id: z.instanceof(Buffer),
	owner_id: z.number(),
	file_name: z.string(),
	kind: z.enum(['file', 'archive']),
	size_bytes: z.number(),
	received_bytes: z.number(),
	rows_read: z.number().nullable(),
	sha256: z.instanceof(Buffer).nullable(),
	storage_key: z.string(),
	state: uploadStateSchema,
	stage: uploadStageSchema,
	progress: z.number(),
	revision: z.number(),
	error: errorDocumentSchema.shape.error.nullable(),
	created_at: z.date(),
	updated_at: z.date(),
	deleted_at: z.date().nullable()
});
const foundSchema = rowSchema.extend({
	archive_public_id: z.instanceof(Buffer).nullable(),
	archive_file_name: z.string().nullable()
});
export type FoundUpload = z.infer<typeof foundSchema>;

const COLUMNS = Object.keys(rowSchema.shape).map((column) => `uploads.${column}`);

/** Uploads that the viewer may see; the caller adds which ones and in what order. */
export function seenUploadRows(db: Knex, viewer: Viewer): Knex.QueryBuilder {
	return foundUploadRows(db).where(seenUploads(db, viewer));
}

/** Uploads whoever asks; the caller says whose. */
export function foundUploadRows(db: Knex): Knex.QueryBuilder {
	return db('uploads')
		.leftJoin('uploads as archives', (on) => on.on('archives.id', 'uploads.parent_id').andOnNull('archives.deleted_at'))
		.select(COLUMNS)
		.select({ archive_public_id: 'archives.public_id', archive_file_name: 'archives.file_name' });
}

/** Runs a query made by `seenUploadRows`. */
export async function listFoundUploads(query: Knex.QueryBuilder): Promise<FoundUpload[]> {
	const rows: unknown = await query;
	return z.array(foundSchema).parse(rows);
}

/** The upload of that id; of a file that was here before, the upload that has its bytes. */
export async function findUpload(db: Knex, viewer: Viewer, uploadId: string): Promise<FoundUpload | undefined> {
	const publicId = decodePublicId(uploadId);
	if (!publicId) return undefined;
	const [upload] = await listFoundUploads(
		seenUploadRows(db, viewer).whereRaw(
			'uploads.id = (SELECT COALESCE(named.same_as_id, named.id) FROM uploads AS named WHERE named.public_id = ?)',
			[publicId]
		)
	);
	return upload;
}

/** A file that an archive held, as its row keeps it. */
export const storedArchiveFileSchema = z.object({
	name: z.string(),
	/** public id; null for what was no table of text */
	upload: publicIdSchema.nullable(),
	knownBefore: z.boolean()
});
export type StoredArchiveFile = z.infer<typeof storedArchiveFileSchema>;

const readingSchema = z.object({
	understood: sourceSchema.nullable(),
	mapping: columnMappingSchema.nullable(),
	header_key: z.instanceof(Buffer).nullable(),
	remembered_mapping_used: z.number(),
	archive_files: z.array(storedArchiveFileSchema).nullable()
});
export type UploadReading = z.infer<typeof readingSchema>;

/** What was understood of the file, and by what: large, so it is read only where it is shown. */
export async function getReading(db: Knex, id: number): Promise<UploadReading> {
	const row: unknown = await db('uploads').where({ id }).first(Object.keys(readingSchema.shape));
	return readingSchema.parse(row);
}

/** @returns public ids of the runs of each upload, in the order of the file */
export async function listRunIds(db: Knex, uploadIds: readonly number[]): Promise<Map<number, string[]>> {
	const rows = await db('runs')
		.whereIn('upload_id', uploadIds)
		.whereNull('deleted_at')
		.orderBy(['upload_id', 'run_index'])
		.select<{ upload_id: number; public_id: Buffer }[]>('upload_id', 'public_id');
	const byUpload = new Map<number, string[]>();
	for (const { upload_id, public_id } of rows) {
		byUpload.set(upload_id, [...(byUpload.get(upload_id) ?? []), encodePublicId(public_id)]);
	}
	return byUpload;
}

export function toUploadHead(row: FoundUpload, runIds: string[]): UploadHead {
	return {
		id: encodePublicId(row.public_id),
		fileName: row.file_name,
		kind: row.kind,
		archive:
			row.archive_public_id && row.archive_file_name !== null
				? { id: encodePublicId(row.archive_public_id), fileName: row.archive_file_name }
				: null,
		sizeBytes: row.size_bytes,
		receivedBytes: row.state === 'receiving' ? row.received_bytes : row.size_bytes,
		rowsRead: row.rows_read,
		state: row.state,
		stage: row.stage,
		progress: row.progress,
		createdAt: row.created_at.toISOString(),
		error: row.error,
		runIds
	};
}
