import type { Knex } from 'knex';
import type { FocusList, FocusPoint } from '../../schemas/focus.ts';
import type { LayoutHead } from '../../schemas/views.ts';
import { seenOwners } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { listFoundFocus, seenFocusRows, type FoundFocus } from '../db/focusRepository.ts';
import { listLayoutHeads } from '../db/layoutHeads.ts';
import { decodePublicId, encodePublicId } from '../db/publicId.ts';
import { notFound } from '../http/notFound.ts';
import { scoreFocus, type FocusScores } from './focusScores.ts';

/** More than these nobody keeps in mind while driving. */
export const FEW = 3;
const MOST_POINTS = 60;

/**
 * A driver's focus points with their scores, open ones first.
 *
 * @param personId whose; the viewer's own when absent
 * @throws 404 when the viewer may see nothing of that person
 */
export async function loadFocusList(viewer: Viewer, personId?: string): Promise<FocusList> {
	const db = database();
	const owners = await seenOwners(db, viewer);
	const people = await db('people')
		.whereIn('id', owners)
		.orderBy('name')
		.select<{ id: number; public_id: Buffer; name: string }[]>('id', 'public_id', 'name');
	const key = personId === undefined ? null : (decodePublicId(personId) ?? notFound());
	const driver = people.find(({ id, public_id }) => (key === null ? id === viewer.personId : public_id.equals(key)));
	if (!driver) notFound();
	const found = await listFoundFocus(
		seenFocusRows(db, viewer).where('focus_points.driver_id', driver.id).limit(MOST_POINTS)
	);
	const points = await toFocusPoints(db, viewer, found);
	return {
		driver: { id: encodePublicId(driver.public_id), name: driver.name },
		own: driver.id === viewer.personId,
		points,
		tooMany: points.filter(({ state }) => state === 'open').length > FEW,
		others: people
			.filter(({ id }) => id !== viewer.personId)
			.map(({ public_id, name }) => ({ id: encodePublicId(public_id), name }))
	};
}

/** @throws 404 when there is no such focus, or the viewer may not see it */
export async function loadFocusPoint(viewer: Viewer, focusId: string): Promise<FocusPoint> {
	const db = database();
	const [point] = await toFocusPoints(db, viewer, [await getFocus(db, viewer, focusId)]);
	return point;
}

export async function getFocus(db: Knex, viewer: Viewer, focusId: string): Promise<FoundFocus> {
	const publicId = decodePublicId(focusId) ?? notFound();
	const [point] = await listFoundFocus(seenFocusRows(db, viewer).where('focus_points.public_id', publicId));
	return point ?? notFound();
}

/** Focus points that the caller has found, with scores. */
export async function toFocusPoints(db: Knex, viewer: Viewer, found: readonly FoundFocus[]): Promise<FocusPoint[]> {
	const [scores, layouts] = await Promise.all([
		scoreFocus(db, viewer, found),
		listLayoutHeads(
			db,
			viewer,
			found.map(({ layout_id }) => layout_id)
		)
	]);
	return found.flatMap((row, i) => {
		const layout = layouts.get(row.layout_id);
		return layout ? [toPoint(row, layout, scores[i])] : [];
	});
}

function toPoint(row: FoundFocus, layout: LayoutHead, scores: FocusScores): FocusPoint {
	const { id, name, circuit, lengthM, cornerCount, mayEdit } = layout;
	const head = (publicId: Buffer | null, name: string | null) =>
		publicId && name !== null ? { id: encodePublicId(publicId), name } : null;
	return {
		id: encodePublicId(row.public_id),
		driver: { id: encodePublicId(row.driver_public_id), name: row.driver_name },
		setBy: head(row.setter_public_id, row.setter_name),
		layout: { id, name, circuit, lengthM, cornerCount, mayEdit },
		car: head(row.car_public_id, row.car_name),
		corner: row.corner_public_id && {
			id: encodePublicId(row.corner_public_id),
			number: row.corner_number,
			name: row.corner_name
		},
		note: row.note_public_id && {
			id: encodePublicId(row.note_public_id),
			body: row.note_body ?? '',
			startM: row.note_start_m ?? 0,
			endM: row.note_end_m ?? 0
		},
		target: row.target,
		state: row.state,
		setAt: row.set_at.toISOString(),
		closedAt: row.closed_at?.toISOString() ?? null,
		...scores,
		mayChange: row.may_change === 1
	};
}
