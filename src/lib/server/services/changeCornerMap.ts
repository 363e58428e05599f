import type { Knex } from 'knex';
import { nearestPlace } from '../../analysis/compare/cornerPlaces.ts';
import { cellsDiffer, changesOf } from '../../analysis/corners/compareMaps.ts';
import { cutCells } from '../../analysis/corners/cutCells.ts';
import { editCornerMap } from '../../analysis/corners/editCornerMap.ts';
import type { ReferencePath } from '../../analysis/model.ts';
import { median } from '../../analysis/stats/quantile.ts';
import type { Cell } from '../../schemas/analysisDocument.ts';
import type { CornerMapAnswer, CornerMapChange, CornerMapView, MapCorner } from '../../schemas/cornerMap.ts';
import { editedCircuits } from '../access/seenLayouts.ts';
import type { Viewer } from '../access/viewer.ts';
import { recordAudit } from '../db/auditRepository.ts';
import { findMap, insertMap, listMapVersions, listOnsets, type StoredMap } from '../db/cornerMapRepository.ts';
import { database } from '../db/database.ts';
import { getPath } from '../db/layoutRepository.ts';
import { decodePublicId, encodePublicId, newPublicId } from '../db/publicId.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { notFound } from '../http/notFound.ts';
import { RequestProblem } from '../http/problem.ts';
import { enqueue } from '../jobs/jobQueue.ts';

interface LayoutRow {
	id: number;
	map_version: number;
	newest: number;
}

/**
 * The corner map that counts, with its kinks and its versions, for whoever may edit it: versions name people.
 *
 * @throws 404 when there is no such layout, or the viewer may not edit it
 */
export async function loadCornerMap(viewer: Viewer, layoutId: string): Promise<CornerMapView> {
	const db = database();
	const layout = await findLayout(db, viewer, layoutId);
	const [map, versions] = await Promise.all([
		getMap(db, layout.id, layout.map_version),
		listMapVersions(db, layout.id)
	]);
	return {
		version: layout.map_version,
		corners: map.corners,
		cells: map.cells,
		versions,
		pending: layout.newest > layout.map_version ? layout.newest : null
	};
}

/**
 * Edits a layout's corner map, or makes an earlier version count again, or says what that would change. A new version counts
 * only once every stored lap is cut by it, which one job does; until then all pages show the old one. Names count at once.
 *
 * @throws 404 when there is no such layout or the viewer may not edit it, 409 when another version came in between or is being
 *   cut, 400 for a step that cannot be done
 */
export async function changeCornerMap(
	viewer: Viewer,
	layoutId: string,
	change: CornerMapChange
): Promise<CornerMapAnswer> {
	const db = database();
	const layout = await findLayout(db, viewer, layoutId);
	if (change.preview) return (await planned(db, layout, change)).answer;
	return await retryOnDeadlock(db, async (trx) => {
		// one editor at a time, and no version between the look and the change
		await trx('layouts').where({ id: layout.id }).forUpdate().first('id');
		const locked = await findLayout(trx, viewer, layoutId);
		const { answer, map, recut } = await planned(trx, locked, change);
		await storeNames(trx, answer);
		const version = recut ? locked.newest + 1 : null;
		if (version !== null) {
			await insertMap(trx, { ...map, layoutId: layout.id, version, createdBy: viewer.personId });
			const job = { layoutId: layout.id, mapVersion: version };
			await enqueue(trx, 'recutLayout', job, { uniqueKey: `recut:${layout.id}:${version}` });
		}
		await recordAudit(trx, {
			actorId: viewer.personId,
			action: 'restore' in change ? 'corner_map_restored' : 'corner_map_edited',
			subject: { kind: 'layout', id: layoutId },
			detail: { from: locked.map_version, to: version ?? locked.map_version, laps: answer.laps }
		});
		return { ...answer, version };
	});
}

async function findLayout(db: Knex, viewer: Viewer, layoutId: string): Promise<LayoutRow> {
	const key = decodePublicId(layoutId) ?? notFound();
	const layout = await db('layouts')
		.join('circuits', 'circuits.id', 'layouts.circuit_id')
		.where('layouts.public_id', key)
		.where(editedCircuits(db, viewer))
		.first<LayoutRow | undefined>(
			'layouts.id',
			'layouts.map_version',
			db.raw('(SELECT MAX(version) FROM corner_maps WHERE corner_maps.layout_id = layouts.id) AS newest')
		);
	return layout ?? notFound();
}

async function getMap(db: Knex, layoutId: number, version: number): Promise<StoredMap> {
	const map = await findMap(db, layoutId, version);
	if (!map) throw new Error(`a layout requires its corner map, got layout ${layoutId} without version ${version}`);
	return map;
}

interface Plan {
	answer: CornerMapAnswer;
	/** as it is to be stored */
	map: StoredMap;
	/** false where only names change */
	recut: boolean;
}

async function planned(db: Knex, layout: LayoutRow, change: CornerMapChange): Promise<Plan> {
	if (change.basedOn !== layout.map_version || layout.newest > layout.map_version) refuseConflict(layout, change);
	const before = await getMap(db, layout.id, layout.map_version);
	const path = await getPath(db, { layoutId: layout.id, pathVersion: before.pathVersion });
	const map = 'restore' in change ? await restored(db, layout, before, change.restore) : edited(before, change, path);
	const cells = 'restore' in change ? map.cells : await cellsOf(db, layout.id, map.corners, path.lengthM);
	const changes = changesOf(before.corners, map.corners);
	const cellsChanged = cellsDiffer(before.cells, cells);
	const recut =
		cellsChanged || changes.some(({ remeasured, before: old, after }) => remeasured || old?.number !== after?.number);
	const affected = recut ? await countAffected(db, layout.id) : { laps: 0, runs: 0 };
	const answer = { version: null, corners: map.corners, cells, changes, cellsChanged, ...affected };
	return { answer, map: { ...map, cells }, recut };
}

function refuseConflict(layout: LayoutRow, { basedOn }: CornerMapChange): never {
	const pending = layout.newest > layout.map_version;
	throw new RequestProblem(
		409,
		'conflict',
		pending
			? `version ${layout.newest} of the corner map is being cut`
			: `the corner map is at version ${layout.map_version}, and the change was made on version ${basedOn}`,
		{ remedy: pending ? 'Wait until it counts, then make the change.' : 'Load the map anew and make the change again.' }
	);
}

function edited(
	before: StoredMap,
	change: Extract<CornerMapChange, { edits: unknown }>,
	path: ReferencePath
): StoredMap {
	const result = editCornerMap(before.corners, change.edits, path, () => encodePublicId(newPublicId()));
	if ('corners' in result) return { ...before, corners: result.corners };
	const { step, message } = result.refusal;
	throw new RequestProblem(400, 'invalid_input', message, { issues: { [`edits.${step}`]: [message] } });
}

/** The corners of an earlier version, under the names that they bear now. */
async function restored(db: Knex, layout: LayoutRow, before: StoredMap, version: number): Promise<StoredMap> {
	const map = version < layout.map_version ? await findMap(db, layout.id, version) : undefined;
	if (map?.pathVersion === before.pathVersion) return map;
	const message = `an earlier version on the same path is required, got ${version}`;
	throw new RequestProblem(400, 'invalid_input', message, { issues: { restore: [message] } });
}

/** Cells by where clean laps of everybody usually begin to slow, as when the map was first drawn. */
async function cellsOf(db: Knex, layoutId: number, corners: MapCorner[], lengthM: number): Promise<Cell[]> {
	const onsets = await listOnsets(db, layoutId);
	const usual = new Map<number, number>();
	for (const { id, number, apexM } of corners) {
		const places = onsets.get(id);
		if (number === null || !places) continue;
		usual.set(number, median(places.map((place) => nearestPlace(apexM, place, lengthM))));
	}
	return cutCells(corners, lengthM, usual);
}

async function countAffected(db: Knex, layoutId: number): Promise<{ laps: number; runs: number }> {
	const [counts] = await db('runs')
		.leftJoin('laps', 'laps.run_id', 'runs.id')
		.where({ 'runs.layout_id': layoutId })
		.select<{ laps: number; runs: number }[]>(
			db.raw('COUNT(laps.id) AS laps'),
			db.raw('COUNT(DISTINCT runs.id) AS `runs`')
		);
	return { laps: Number(counts.laps), runs: Number(counts.runs) };
}

async function storeNames(trx: Knex.Transaction, { changes }: CornerMapAnswer): Promise<void> {
	for (const { id, before, after } of changes) {
		if (!before || !after || before.name === after.name) continue;
		await trx('corners')
			.where({ public_id: decodePublicId(id) })
			.update({ name: after.name });
	}
}
