import type { Knex } from 'knex';
import { z } from 'zod';
import {
	debriefContentSchema,
	debriefDocumentSchema,
	type DebriefDocument,
	type DebriefHead,
	type DebriefLink
} from '../../schemas/debrief.ts';
import type { Reply } from '../../schemas/zoneNote.ts';
import { ownDebriefs, seenDebriefs } from '../access/coaching.ts';
import type { Viewer } from '../access/viewer.ts';
import { encodePublicId } from './publicId.ts';

const buffer = z.instanceof(Buffer);

const rowSchema = z.object({
	id: z.number(),
	public_id: buffer,
	author_id: z.number(),
	author_public_id: buffer,
	author_name: z.string(),
	driver_id: z.number(),
	driver_public_id: buffer,
	driver_name: z.string(),
	run_id: z.number(),
	run_public_id: buffer,
	lap_public_id: buffer.nullable(),
	reference_public_id: buffer.nullable(),
	content: debriefContentSchema,
	revision: z.number(),
	updated_at: z.date(),
	sent_at: z.date().nullable(),
	sent_id: z.number().nullable(),
	read_at: z.date().nullable(),
	replies: z.number(),
	circuit_name: z.string(),
	layout_name: z.string(),
	sort_at: z.date(),
	is_driver: z.number()
});
export type FoundDebrief = z.infer<typeof rowSchema>;

/** Debriefs that the viewer may see; the caller adds which ones and in what order. */
export function seenDebriefRows(db: Knex, viewer: Viewer): Knex.QueryBuilder {
	return db('debriefs')
		.join('runs', 'runs.id', 'debriefs.run_id')
		.join('layouts', 'layouts.id', 'runs.layout_id')
		.join('circuits', 'circuits.id', 'layouts.circuit_id')
		.join('people as authors', 'authors.id', 'debriefs.author_id')
		.join('people as drivers', 'drivers.id', 'debriefs.driver_id')
		.leftJoin('laps as driver_laps', 'driver_laps.id', 'debriefs.lap_id')
		.leftJoin('laps as reference_laps', 'reference_laps.id', 'debriefs.reference_lap_id')
		.leftJoin('sent_debriefs', 'sent_debriefs.debrief_id', 'debriefs.id')
		.where(seenDebriefs(db, viewer))
		.select(
			'debriefs.id',
			'debriefs.public_id',
			'debriefs.author_id',
			'debriefs.driver_id',
			'debriefs.run_id',
			'debriefs.content',
			'debriefs.revision',
			'debriefs.updated_at',
			'debriefs.sent_at',
			'sent_debriefs.read_at',
			'runs.sort_at',
			{
				author_public_id: 'authors.public_id',
				author_name: 'authors.name',
				driver_public_id: 'drivers.public_id',
				driver_name: 'drivers.name',
				run_public_id: 'runs.public_id',
				lap_public_id: 'driver_laps.public_id',
				reference_public_id: 'reference_laps.public_id',
				sent_id: 'sent_debriefs.id',
				circuit_name: 'circuits.name',
				layout_name: 'layouts.name'
			},
			db.raw(
				'(SELECT COUNT(*) FROM debrief_replies WHERE debrief_replies.sent_debrief_id = sent_debriefs.id) AS replies'
			),
			db.raw('? AS is_driver', [ownDebriefs(db, viewer)])
		);
}

/** Runs a query made by `seenDebriefRows`. */
export async function listFoundDebriefs(query: Knex.QueryBuilder): Promise<FoundDebrief[]> {
	const rows: unknown = await query;
	return z.array(rowSchema).parse(rows);
}

/** What names a debrief wherever it stands. */
export function debriefKeys(row: FoundDebrief, viewer: Viewer): Omit<DebriefHead, 'where' | 'replies'> {
	return {
		id: encodePublicId(row.public_id),
		author: { id: encodePublicId(row.author_public_id), name: row.author_name },
		driver: { id: encodePublicId(row.driver_public_id), name: row.driver_name },
		own: row.author_id === viewer.personId,
		run: encodePublicId(row.run_public_id),
		revision: row.revision,
		updatedAt: row.updated_at.toISOString(),
		sentAt: row.sent_at?.toISOString() ?? null,
		readAt: row.read_at?.toISOString() ?? null
	};
}

/** @param where "Vallmere Park, grand prix" */
export function toDebriefHead(row: FoundDebrief, viewer: Viewer, where: string): DebriefHead {
	return { ...debriefKeys(row, viewer), where, replies: row.replies };
}

/** The frozen copy of a debrief that the caller has been shown. */
export async function getSentDocument(db: Knex, sentId: number): Promise<DebriefDocument> {
	const row: unknown = await db('sent_debriefs').where({ id: sentId }).first('document');
	return z.object({ document: debriefDocumentSchema }).parse(row).document;
}

const replyRowSchema = z.object({
	author_id: z.number(),
	public_id: buffer,
	name: z.string(),
	body: z.string(),
	created_at: z.date()
});

/** What was said under a sent debrief, oldest first. */
export async function listDebriefReplies(db: Knex, viewer: Viewer, sentId: number): Promise<Reply[]> {
	const found: unknown = await db('debrief_replies')
		.join('people', 'people.id', 'debrief_replies.author_id')
		.where({ sent_debrief_id: sentId })
		.orderBy('debrief_replies.id')
		.select('author_id', 'people.public_id', 'people.name', 'debrief_replies.body', 'debrief_replies.created_at');
	return z
		.array(replyRowSchema)
		.parse(found)
		.map((row) => ({
			author: { id: encodePublicId(row.public_id), name: row.name },
			own: row.author_id === viewer.personId,
			body: row.body,
			at: row.created_at.toISOString()
		}));
}

const linkRowSchema = z.object({
	public_id: buffer,
	created_at: z.date(),
	expires_at: z.date(),
	opened_at: z.date().nullable()
});

/** Links to a sent debrief that the viewer made and that still hold. */
export async function listLinks(db: Knex, viewer: Viewer, sentId: number): Promise<DebriefLink[]> {
	const found: unknown = await db('debrief_links')
		.where({ sent_debrief_id: sentId, created_by: viewer.personId })
		.whereNull('revoked_at')
		.whereRaw('expires_at > CURRENT_TIMESTAMP(3)')
		.orderBy('id')
		.select('public_id', 'created_at', 'expires_at', 'opened_at');
	return z
		.array(linkRowSchema)
		.parse(found)
		.map((row) => ({
			id: encodePublicId(row.public_id),
			createdAt: row.created_at.toISOString(),
			expiresAt: row.expires_at.toISOString(),
			openedAt: row.opened_at?.toISOString() ?? null
		}));
}
