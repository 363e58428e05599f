import type { Knex } from 'knex';
import type { ZoneNoteChange, ZoneNoteDetail, ZoneNoteInput } from '../../schemas/zoneNote.ts';
import { coachedPeople, keptNotes } from '../access/coaching.ts';
import { seenRuns } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { decodePublicId, encodePublicId, newPublicId } from '../db/publicId.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { notFound } from '../http/notFound.ts';
import { RequestProblem } from '../http/problem.ts';
import { getLayoutId, getNote, loadNote } from './zoneNotes.ts';

/**
 * Writes a note on a stretch of a layout.
 *
 * @throws 404 when the layout, the corner on it, the driver or the run are not the viewer's to write on
 */
export async function writeNote(viewer: Viewer, input: ZoneNoteInput): Promise<ZoneNoteDetail> {
	const db = database();
	const layoutId = await getLayoutId(db, viewer, input.layout);
	const [layout, driverId, cornerId, runId] = await Promise.all([
		db('layouts').where({ id: layoutId }).first<{ path_version: number }>('path_version'),
		input.driver === null ? null : getCoached(db, viewer, layoutId, input.driver),
		input.corner === null ? null : getCornerId(db, layoutId, input.corner),
		input.run === null ? null : getRunId(db, viewer, input.run)
	]);
	const publicId = newPublicId();
	await db('zone_notes').insert({
		public_id: publicId,
		author_id: viewer.personId,
		driver_id: driverId,
		layout_id: layoutId,
		path_version: layout.path_version,
		corner_id: cornerId,
		run_id: runId,
		start_m: input.startM,
		end_m: input.endM,
		body: input.body,
		target: input.target && JSON.stringify(input.target)
	});
	return await loadNote(viewer, encodePublicId(publicId));
}

/**
 * Changes a note; what it said before is kept.
 *
 * @throws {RequestProblem} 409 with both texts when somebody else changed it since the writer read it: nothing is overwritten
 * @throws 404 when it is not the viewer's to change
 */
export async function changeNote(viewer: Viewer, noteId: string, change: ZoneNoteChange): Promise<ZoneNoteDetail> {
	const db = database();
	const note = await getNote(db, viewer, noteId);
	if (note.may_edit !== 1) notFound();
	const cornerId = change.corner === null ? null : await getCornerId(db, note.layout_id, change.corner);
	await retryOnDeadlock(db, async (trx) => {
		const now = await trx('zone_notes').where({ id: note.id }).forUpdate().first<Stored | undefined>();
		if (!now) notFound();
		if (now.revision !== change.revision) throw conflictOf(now, change);
		await trx('zone_note_revisions').insert({
			zone_note_id: note.id,
			revision: now.revision,
			corner_id: now.corner_id,
			start_m: now.start_m,
			end_m: now.end_m,
			body: now.body,
			target: now.target && JSON.stringify(now.target),
			changed_by: viewer.personId
		});
		await trx('zone_notes')
			.where({ id: note.id })
			.update({
				corner_id: cornerId,
				start_m: change.startM,
				end_m: change.endM,
				body: change.body,
				target: change.target && JSON.stringify(change.target),
				revision: now.revision + 1
			});
	});
	return await loadNote(viewer, noteId);
}

/** Takes a note out of sight; it can be brought back. */
export async function deleteNote(viewer: Viewer, noteId: string): Promise<void> {
	await setDeleted(viewer, noteId, true);
}

/** @throws 404 when it is not the viewer's to bring back */
export async function restoreNote(viewer: Viewer, noteId: string): Promise<ZoneNoteDetail> {
	await setDeleted(viewer, noteId, false);
	return await loadNote(viewer, noteId);
}

/** @throws 404 when there is no such note, or the viewer may not see it */
export async function replyToNote(viewer: Viewer, noteId: string, body: string): Promise<ZoneNoteDetail> {
	const db = database();
	const note = await getNote(db, viewer, noteId);
	await db('zone_note_replies').insert({
		public_id: newPublicId(),
		zone_note_id: note.id,
		author_id: viewer.personId,
		body
	});
	return await loadNote(viewer, noteId);
}

interface Stored {
	revision: number;
	corner_id: number | null;
	start_m: number;
	end_m: number;
	body: string;
	target: unknown;
}

function conflictOf(now: Stored, { body, startM, endM, target }: ZoneNoteChange): RequestProblem {
	return new RequestProblem(409, 'conflict', 'the note was changed since you read it', {
		remedy: 'Look at both texts and save again',
		conflict: {
			revision: now.revision,
			theirs: { startM: now.start_m, endM: now.end_m, body: now.body, target: now.target },
			yours: { startM, endM, body, target }
		}
	});
}

async function setDeleted(viewer: Viewer, noteId: string, deleted: boolean): Promise<void> {
	const db = database();
	const publicId = decodePublicId(noteId) ?? notFound();
	const changed = await db('zone_notes')
		.where({ public_id: publicId })
		.where(keptNotes(db, viewer))
		.update({ deleted_at: deleted ? db.raw('CURRENT_TIMESTAMP(3)') : null });
	if (changed === 0) notFound();
}

/** @throws 404 when the viewer may not write on the person's laps there */
export async function getCoached(db: Knex, viewer: Viewer, layoutId: number, personId: string): Promise<number> {
	const person = await db('people')
		.where({ public_id: decodePublicId(personId) ?? notFound() })
		.where(coachedPeople(db, viewer, layoutId))
		.first<{ id: number } | undefined>('people.id');
	return person?.id ?? notFound();
}

/** @throws 404 when the layout has no such corner */
export async function getCornerId(db: Knex, layoutId: number, cornerId: string): Promise<number> {
	const corner = await db('corners')
		.where({ public_id: decodePublicId(cornerId) ?? notFound(), layout_id: layoutId })
		.first<{ id: number } | undefined>('id');
	return corner?.id ?? notFound();
}

async function getRunId(db: Knex, viewer: Viewer, runId: string): Promise<number> {
	const run = await db('runs')
		.where({ public_id: decodePublicId(runId) ?? notFound() })
		.where(seenRuns(db, viewer))
		.first<{ id: number } | undefined>('id');
	return run?.id ?? notFound();
}
