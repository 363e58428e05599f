import { createHash } from 'node:crypto';
import type { ComparisonView } from '../../schemas/views.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { listFoundLaps, seenLaps } from '../db/lapRepository.ts';
import { listReferences, toHeads } from './chooseReference.ts';
import { compareStored } from './compareStored.ts';
import { loadPair } from './loadPair.ts';

/**
 * Two laps laid on each other, with all that a page shows of them.
 *
 * @throws as loadPair; 404 also when one of them was not laid on the grid
 */
export async function loadComparison(viewer: Viewer, lapId: string, referenceId: string): Promise<ComparisonView> {
	const db = database();
	const { driver, reference, sheet, heads, hash } = await loadPair(db, viewer, lapId, referenceId);
	const place = {
		layoutId: driver.layout_id,
		pathVersion: driver.path_version,
		mapVersion: driver.map_version,
		carId: driver.car_id
	};
	const [stored, path, runLaps, references] = await Promise.all([
		compareStored(db, driver, reference, sheet),
		sheet.path(),
		listFoundLaps(
			seenLaps(db, viewer)
				.where({ 'laps.run_id': driver.run_id, 'laps.kind': 'timed' })
				.whereNotNull('laps.grid_length_m')
				.orderBy('laps.ordinal')
		),
		listReferences(db, viewer, place)
	]);
	const others = references.filter(({ lap_id }) => lap_id !== driver.lap_id && lap_id !== reference.lap_id);
	const choices = { runLaps: toHeads(runLaps, viewer), otherReferences: toHeads(others, viewer) };
	const contentHash = createHash('sha256').update(hash).update(JSON.stringify(choices)).digest('hex');
	return { ...heads, ...stored, ...choices, path, corners: sheet.corners, cells: sheet.cells, contentHash };
}
