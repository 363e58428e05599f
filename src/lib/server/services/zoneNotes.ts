import type { Knex } from 'knex';
import type { ZoneNoteDetail, ZoneNoteView, NotesQuery } from '../../schemas/zoneNote.ts';
import { seenLayouts } from '../access/seenLayouts.ts';
import { seenOwners } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { decodePublicId } from '../db/publicId.ts';
import {
	listFoundNotes,
	listReplies,
	listRevisions,
	seenNoteRows,
	toNoteView,
	type FoundNote
} from '../db/zoneNoteRepository.ts';
import { notFound } from '../http/notFound.ts';

const MOST_NOTES = 200;

/**
 * Notes on a layout that the viewer may see, in the order of the layout.
 *
 * @throws 404 when the viewer may not see the layout
 */
export async function loadNotes(viewer: Viewer, { layout, corner, driver }: NotesQuery): Promise<ZoneNoteView[]> {
	const db = database();
	const layoutId = await getLayoutId(db, viewer, layout);
	const query = seenNoteRows(db, viewer)
		.where('zone_notes.layout_id', layoutId)
		.orderBy(['zone_notes.start_m', 'zone_notes.id'])
		.limit(MOST_NOTES);
	if (corner !== undefined) void query.where('corners.public_id', decodePublicId(corner));
	if (driver !== undefined)
		void query.where((for_) =>
			for_.where('drivers.public_id', decodePublicId(driver)).orWhereNull('zone_notes.driver_id')
		);
	return await withReplies(db, viewer, await listFoundNotes(query));
}

/**
 * One note with its answers and what it said before.
 *
 * @throws 404 when there is no such note, or the viewer may not see it
 */
export async function loadNote(viewer: Viewer, noteId: string): Promise<ZoneNoteDetail> {
	const db = database();
	const note = await getNote(db, viewer, noteId);
	const [[view], history] = await Promise.all([withReplies(db, viewer, [note]), listRevisions(db, note.id)]);
	return { ...view, history };
}

export async function getNote(db: Knex, viewer: Viewer, noteId: string): Promise<FoundNote> {
	const publicId = decodePublicId(noteId) ?? notFound();
	const [note] = await listFoundNotes(seenNoteRows(db, viewer).where('zone_notes.public_id', publicId));
	return note ?? notFound();
}

async function withReplies(db: Knex, viewer: Viewer, notes: readonly FoundNote[]): Promise<ZoneNoteView[]> {
	const replies = await listReplies(
		db,
		viewer,
		notes.map(({ id }) => id)
	);
	return notes.map((note) => toNoteView(note, replies.get(note.id) ?? []));
}

/** @throws 404 when there is no such layout, or the viewer may not see it */
export async function getLayoutId(db: Knex, viewer: Viewer, layoutId: string): Promise<number> {
	const publicId = decodePublicId(layoutId) ?? notFound();
	const layout = await db('layouts')
		.join('circuits', 'circuits.id', 'layouts.circuit_id')
		.where({ 'layouts.public_id': publicId })
		.where(seenLayouts(db, viewer, await seenOwners(db, viewer)))
		.first<{ id: number } | undefined>('layouts.id');
	return layout?.id ?? notFound();
}
