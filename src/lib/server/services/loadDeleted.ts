import type { Knex } from 'knex';
import { z } from 'zod';
import type { PublicId } from '../../schemas/views.ts';
import { keptPeople, keptUploads } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { encodePublicId } from '../db/publicId.ts';
import { foundUploadRows, listFoundUploads } from '../db/uploadRepository.ts';
import { UNDO_DAYS } from '../upload/deleteUpload.ts';

/** Something that was taken out of sight and can be brought back until it is removed for good. */
export interface Deleted {
	id: PublicId;
	kind: 'upload' | 'run';
	/** of the file, or of the circuit that the run was driven on */
	name: string;
	/** whose it is, where it is not the viewer's own */
	owner: string | null;
	/** what it was, beyond its name: when it came, or which file the run was in */
	fileName: string | null;
	/** ISO 8601 */
	from: string;
	deletedAt: string;
	endsAt: string;
}

const MOST = 200;

/** What the viewer, or a minor in their care, deleted and may still bring back, latest first. */
export async function loadDeleted(viewer: Viewer): Promise<Deleted[]> {
	const db = database();
	const [uploads, runs] = await Promise.all([listDeletedUploads(db, viewer), listDeletedRuns(db, viewer)]);
	return [...uploads, ...runs].sort((one, other) => other.deletedAt.localeCompare(one.deletedAt));
}

async function listDeletedUploads(db: Knex, viewer: Viewer): Promise<Deleted[]> {
	const rows = await listFoundUploads(
		foundUploadRows(db)
			.where(keptUploads(db, viewer))
			.whereNotNull('uploads.deleted_at')
			.whereRaw('uploads.deleted_at > CURRENT_TIMESTAMP(3) - INTERVAL ? DAY', [UNDO_DAYS])
			.whereNull('uploads.same_as_id')
			.orderBy('uploads.deleted_at', 'desc')
			.limit(MOST)
	);
	return rows.flatMap((row) =>
		row.deleted_at === null
			? []
			: [
					{
						id: encodePublicId(row.public_id),
						kind: 'upload',
						name: row.file_name,
						owner: null,
						fileName: null,
						from: row.created_at.toISOString(),
						...times(row.deleted_at)
					}
				]
	);
}

const runRowSchema = z.object({
	public_id: z.instanceof(Buffer),
	owner_id: z.number(),
	owner_name: z.string(),
	circuit_name: z.string(),
	file_name: z.string().nullable(),
	sort_at: z.date(),
	deleted_at: z.date()
});

/** Runs that were deleted by themselves: those of a deleted upload come back with it. */
async function listDeletedRuns(db: Knex, viewer: Viewer): Promise<Deleted[]> {
	const found: unknown = await db('runs')
		.join('people', 'people.id', 'runs.owner_id')
		.join('layouts', 'layouts.id', 'runs.layout_id')
		.join('circuits', 'circuits.id', 'layouts.circuit_id')
		.leftJoin('uploads', 'uploads.id', 'runs.upload_id')
		.whereIn('runs.owner_id', await keptPeople(db, viewer))
		.whereNotNull('runs.deleted_at')
		.whereRaw('runs.deleted_at > CURRENT_TIMESTAMP(3) - INTERVAL ? DAY', [UNDO_DAYS])
		.whereNull('uploads.deleted_at')
		.orderBy('runs.deleted_at', 'desc')
		.limit(MOST)
		.select('runs.public_id', 'runs.owner_id', 'runs.sort_at', 'runs.deleted_at', 'uploads.file_name', {
			owner_name: 'people.name',
			circuit_name: 'circuits.name'
		});
	return z
		.array(runRowSchema)
		.parse(found)
		.map((row) => ({
			id: encodePublicId(row.public_id),
			kind: 'run',
			name: row.circuit_name,
			owner: row.owner_id === viewer.personId ? null : row.owner_name,
			fileName: row.file_name,
			from: row.sort_at.toISOString(),
			...times(row.deleted_at)
		}));
}

function times(deletedAt: Date) {
	const endsAt = new Date(deletedAt);
	endsAt.setUTCDate(endsAt.getUTCDate() + UNDO_DAYS);
	return { deletedAt: deletedAt.toISOString(), endsAt: endsAt.toISOString() };
}
