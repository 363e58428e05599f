import type { Knex } from 'knex';
import type { FocusInput, FocusPoint, FocusState } from '../../schemas/focus.ts';
import type { Viewer } from '../access/viewer.ts';
import { recordAudit } from '../db/auditRepository.ts';
import { database } from '../db/database.ts';
import { decodePublicId, encodePublicId, newPublicId } from '../db/publicId.ts';
import { notFound } from '../http/notFound.ts';
import { RequestProblem } from '../http/problem.ts';
import { getFocus, loadFocusPoint } from './focus.ts';
import { getLayoutId, getNote } from './zoneNotes.ts';
import { getCoached, getCornerId } from './zoneNotesEdit.ts';

/**
 * Opens a focus: from now on every lap of the driver on that layout and car is scored.
 *
 * @param setAt when it was agreed, where that was before now
 * @throws 404 when driver, layout, car, corner or note are not the viewer's to set a focus on
 */
export async function openFocus(viewer: Viewer, input: FocusInput, setAt: Date = new Date()): Promise<FocusPoint> {
	const db = database();
	const layoutId = await getLayoutId(db, viewer, input.layout);
	const driverId = await getCoached(db, viewer, layoutId, input.driver);
	const note = input.note === null ? null : await getNote(db, viewer, input.note);
	if (note && (note.layout_id !== layoutId || (note.driver_id !== null && note.driver_id !== driverId))) notFound();
	const target = input.target ?? note?.target ?? null;
	if (target === null) {
		throw new RequestProblem(400, 'invalid_input', 'a focus requires a target, and the note has none', {
			remedy: 'Add a target to the note'
		});
	}
	const cornerId = input.corner === null ? (note?.corner_id ?? null) : await getCornerId(db, layoutId, input.corner);
	if (cornerId === null && target.kind !== 'lap_time' && target.kind !== 'free') {
		throw new RequestProblem(400, 'invalid_input', 'a focus requires a corner', {
			issues: { corner: ['say in which corner'] }
		});
	}
	const publicId = newPublicId();
	await db('focus_points').insert({
		public_id: publicId,
		driver_id: driverId,
		set_by: viewer.personId,
		layout_id: layoutId,
		car_id: input.car === null ? null : await getCarId(db, driverId, input.car),
		corner_id: cornerId,
		zone_note_id: note?.id ?? null,
		target: JSON.stringify(target),
		set_at: setAt
	});
	return await loadFocusPoint(viewer, encodePublicId(publicId));
}

/**
 * Closes a focus as met, drops it, or opens it again.
 *
 * @throws 404 when it is not the viewer's to change
 */
export async function setFocusState(viewer: Viewer, focusId: string, state: FocusState): Promise<FocusPoint> {
	const db = database();
	const focus = await getFocus(db, viewer, focusId);
	if (focus.may_change !== 1) notFound();
	await db('focus_points')
		.where({ id: focus.id })
		.update({ state, closed_at: state === 'open' ? null : db.raw('CURRENT_TIMESTAMP(3)') });
	await recordAudit(db, {
		actorId: viewer.personId,
		action: `focus_${state}`,
		subject: { kind: 'focus', id: focusId }
	});
	return await loadFocusPoint(viewer, focusId);
}

/** A car of the driver: only their own laps are scored. */
async function getCarId(db: Knex, driverId: number, carId: string): Promise<number> {
	const car = await db('cars')
		.where({ public_id: decodePublicId(carId) ?? notFound(), owner_id: driverId })
		.first<{ id: number } | undefined>('id');
	return car?.id ?? notFound();
}
