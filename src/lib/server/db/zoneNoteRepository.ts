import type { Knex } from 'knex';
import { z } from 'zod';
import { targetSchema } from '../../schemas/target.ts';
import type { NoteRevision, Reply, ZoneNoteView } from '../../schemas/zoneNote.ts';
import { keptNotes, seenNotes } from '../access/coaching.ts';
import type { Viewer } from '../access/viewer.ts';
import { encodePublicId } from './publicId.ts';

const buffer = z.instanceof(Buffer);

const noteRowSchema = z.object({
	id: z.number(),
	public_id: buffer,
	layout_id: z.number(),
	layout_public_id: buffer,
	path_version: z.number(),
	author_id: z.number(),
	author_public_id: buffer,
	author_name: z.string(),
	driver_id: z.number().nullable(),
	driver_public_id: buffer.nullable(),
	driver_name: z.string().nullable(),
	corner_id: z.number().nullable(),
	corner_public_id: buffer.nullable(),
	corner_name: z.string().nullable(),
	corner_number: z.number().nullable(),
	run_id: z.number().nullable(),
	start_m: z.number(),
	end_m: z.number(),
	body: z.string(),
	target: targetSchema.nullable(),
	revision: z.number(),
	created_at: z.date(),
	updated_at: z.date(),
	may_edit: z.number()
});
export type FoundNote = z.infer<typeof noteRowSchema>;

/** Notes that the viewer may see; the caller adds which ones and in what order. */
export function seenNoteRows(db: Knex, viewer: Viewer): Knex.QueryBuilder {
	return db('zone_notes')
		.join('layouts', 'layouts.id', 'zone_notes.layout_id')
		.join('people as authors', 'authors.id', 'zone_notes.author_id')
		.leftJoin('people as drivers', 'drivers.id', 'zone_notes.driver_id')
		.leftJoin('corners', 'corners.id', 'zone_notes.corner_id')
		.where(seenNotes(db, viewer))
		.select(
			'zone_notes.id',
			'zone_notes.public_id',
			'zone_notes.layout_id',
			'zone_notes.path_version',
			'zone_notes.author_id',
			'zone_notes.driver_id',
			'zone_notes.corner_id',
			'zone_notes.run_id',
			'zone_notes.start_m',
			'zone_notes.end_m',
			'zone_notes.body',
			'zone_notes.target',
			'zone_notes.revision',
			'zone_notes.created_at',
			'zone_notes.updated_at',
			{
				layout_public_id: 'layouts.public_id',
				author_public_id: 'authors.public_id',
				author_name: 'authors.name',
				driver_public_id: 'drivers.public_id',
				driver_name: 'drivers.name',
				corner_public_id: 'corners.public_id',
				corner_name: 'corners.name'
			},
			db.raw(
				`(SELECT corner_places.number FROM corner_maps JOIN corner_places ON corner_places.corner_map_id = corner_maps.id
					WHERE corner_maps.layout_id = layouts.id AND corner_maps.version = layouts.map_version
						AND corner_places.corner_id = zone_notes.corner_id) AS corner_number`
			),
			db.raw('? AS may_edit', [keptNotes(db, viewer)])
		);
}

/** Runs a query made by `seenNoteRows`. */
export async function listFoundNotes(query: Knex.QueryBuilder): Promise<FoundNote[]> {
	const rows: unknown = await query;
	return z.array(noteRowSchema).parse(rows);
}

export function toNoteView(row: FoundNote, replies: Reply[]): ZoneNoteView {
	return {
		id: encodePublicId(row.public_id),
		layout: encodePublicId(row.layout_public_id),
		author: { id: encodePublicId(row.author_public_id), name: row.author_name },
		driver:
			row.driver_public_id && row.driver_name !== null
				? { id: encodePublicId(row.driver_public_id), name: row.driver_name }
				: null,
		pathVersion: row.path_version,
		corner: row.corner_public_id && encodePublicId(row.corner_public_id),
		cornerNumber: row.corner_number,
		cornerName: row.corner_name,
		startM: row.start_m,
		endM: row.end_m,
		body: row.body,
		target: row.target,
		revision: row.revision,
		createdAt: row.created_at.toISOString(),
		updatedAt: row.updated_at.toISOString(),
		replies,
		mayEdit: row.may_edit === 1,
		mayReply: true
	};
}

const replyRowSchema = z.object({
	zone_note_id: z.number(),
	author_id: z.number(),
	public_id: buffer,
	name: z.string(),
	body: z.string(),
	created_at: z.date()
});

/** Answers to notes that the caller has been shown, oldest first; keyed by note. */
export async function listReplies(db: Knex, viewer: Viewer, noteIds: readonly number[]): Promise<Map<number, Reply[]>> {
	if (noteIds.length === 0) return new Map();
	const found: unknown = await db('zone_note_replies')
		.join('people', 'people.id', 'zone_note_replies.author_id')
		.whereIn('zone_note_replies.zone_note_id', noteIds)
		.orderBy(['zone_note_replies.zone_note_id', 'zone_note_replies.id'])
		.select(
			'zone_note_replies.zone_note_id',
			'zone_note_replies.author_id',
			'zone_note_replies.body',
			'zone_note_replies.created_at',
			'people.public_id',
			'people.name'
		);
	const byNote = new Map<number, Reply[]>();
	for (const row of z.array(replyRowSchema).parse(found)) {
		const replies = byNote.get(row.zone_note_id) ?? [];
		byNote.set(row.zone_note_id, replies);
		replies.push({
			author: { id: encodePublicId(row.public_id), name: row.name },
			own: row.author_id === viewer.personId,
			body: row.body,
			at: row.created_at.toISOString()
		});
	}
	return byNote;
}

const revisionRowSchema = z.object({
	revision: z.number(),
	body: z.string(),
	start_m: z.number(),
	end_m: z.number(),
	target: targetSchema.nullable(),
	name: z.string().nullable(),
	changed_at: z.date()
});

/** What a note that the caller has been shown said before each change, newest first. */
export async function listRevisions(db: Knex, noteId: number): Promise<NoteRevision[]> {
	const found: unknown = await db('zone_note_revisions')
		.leftJoin('people', 'people.id', 'zone_note_revisions.changed_by')
		.where({ zone_note_id: noteId })
		.orderBy('revision', 'desc')
		.select('revision', 'body', 'start_m', 'end_m', 'target', 'people.name', 'changed_at');
	return z
		.array(revisionRowSchema)
		.parse(found)
		.map((row) => ({
			revision: row.revision,
			body: row.body,
			startM: row.start_m,
			endM: row.end_m,
			target: row.target,
			changedBy: row.name,
			changedAt: row.changed_at.toISOString()
		}));
}
