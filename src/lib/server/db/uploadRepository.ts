import type { Knex } from 'knex';
import { z } from 'zod';
import { errorDocumentSchema, sourceSchema } from '../../schemas/analysisDocument.ts';
import { uploadStageSchema, uploadStateSchema, type UploadHead } from '../../schemas/views.ts';
import { seenUploads } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { decodePublicId, encodePublicId } from './publicId.ts';

const rowSchema = z.object({
	id: z.number(),
	public_id: z.instanceof(Buffer),
	owner_id: z.number(),
	file_name: z.string(),
	size_bytes: z.number(),
	sha256: z.instanceof(Buffer).nullable(),
	storage_key: z.string(),
	state: uploadStateSchema,
	stage: uploadStageSchema,
	progress: z.number(),
	revision: z.number(),
	error: errorDocumentSchema.shape.error.nullable(),
	created_at: z.date()
});
export type FoundUpload = z.infer<typeof rowSchema>;

const COLUMNS = Object.keys(rowSchema.shape).map((column) => `uploads.${column}`);

/** Uploads that the viewer may see; the caller adds which ones and in what order. */
export function seenUploadRows(db: Knex, viewer: Viewer): Knex.QueryBuilder {
	return db('uploads').where(seenUploads(db, viewer)).select(COLUMNS);
}

/** Runs a query made by `seenUploadRows`. */
export async function listFoundUploads(query: Knex.QueryBuilder): Promise<FoundUpload[]> {
	const rows: unknown = await query;
	return z.array(rowSchema).parse(rows);
}

export async function findUpload(db: Knex, viewer: Viewer, uploadId: string): Promise<FoundUpload | undefined> {
	const publicId = decodePublicId(uploadId);
	if (!publicId) return undefined;
	const [upload] = await listFoundUploads(seenUploadRows(db, viewer).where('uploads.public_id', publicId));
	return upload;
}

/** What was understood of the file: large, so it is read only where it is shown. */
export async function getUnderstood(db: Knex, id: number): Promise<z.infer<typeof sourceSchema> | null> {
	const row: unknown = await db('uploads').where({ id }).first('understood');
	return z.object({ understood: sourceSchema.nullable() }).parse(row).understood;
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
		sizeBytes: row.size_bytes,
		state: row.state,
		stage: row.stage,
		progress: row.progress,
		createdAt: row.created_at.toISOString(),
		error: row.error,
		runIds
	};
}
