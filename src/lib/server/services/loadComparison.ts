import { createHash } from 'node:crypto';
import { error } from '@sveltejs/kit';
import type { Knex } from 'knex';
import { z } from 'zod';
import { warningSchema } from '../../schemas/analysisDocument.ts';
import type { ComparisonView, Fairness } from '../../schemas/views.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { listFoundLaps, seenLaps, toLapHead, type FoundLap } from '../db/lapRepository.ts';
import { listLayoutHeads } from '../db/layoutHeads.ts';
import { decodePublicId } from '../db/publicId.ts';
import { notFound } from '../http/notFound.ts';
import { listReferences, toHeads } from './chooseReference.ts';
import { compareStored } from './compareStored.ts';

/**
 * Two laps laid on each other, with all that a page shows of them.
 *
 * @throws 404 when one of them does not exist or the viewer may not see it; 409 when they lie on different layouts, or on
 *   versions of a layout that cannot be laid on each other
 */
export async function loadComparison(viewer: Viewer, lapId: string, referenceId: string): Promise<ComparisonView> {
	const db = database();
	const { driver, reference } = await findPair(db, viewer, lapId, referenceId);
	const version = { layoutId: driver.layout_id, pathVersion: driver.path_version, mapVersion: driver.map_version };
	const [compared, layouts, runLaps, references, warnings] = await Promise.all([
		compareStored(db, driver, reference),
		listLayoutHeads(db, viewer, [driver.layout_id]),
		listFoundLaps(
			seenLaps(db, viewer)
				.where({ 'laps.run_id': driver.run_id, 'laps.kind': 'timed' })
				.whereNotNull('laps.grid_length_m')
				.orderBy('laps.ordinal')
		),
		listReferences(db, viewer, { ...version, carId: driver.car_id }),
		listWarnings(db, driver.analysis_id)
	]);
	const layout = layouts.get(driver.layout_id);
	if (!compared || !layout) notFound();
	const heads = {
		driver: toLapHead(driver, viewer),
		reference: toLapHead(reference, viewer),
		layout,
		fairness: fairnessOf(driver, reference),
		runLaps: toHeads(runLaps, viewer),
		otherReferences: toHeads(
			references.filter(({ lap_id }) => lap_id !== driver.lap_id && lap_id !== reference.lap_id),
			viewer
		),
		warnings
	};
	const contentHash = createHash('sha256').update(compared.hash).update(JSON.stringify(heads)).digest('hex');
	return { ...heads, ...compared.stored, contentHash };
}

/** Both laps, seen by the viewer and fit to be laid on each other. */
export async function findPair(
	db: Knex,
	viewer: Viewer,
	lapId: string,
	referenceId: string
): Promise<{ driver: FoundLap; reference: FoundLap }> {
	const [lapKey, referenceKey] = [decodePublicId(lapId), decodePublicId(referenceId)];
	if (!lapKey || !referenceKey) notFound();
	const laps = await listFoundLaps(seenLaps(db, viewer).whereIn('laps.public_id', [lapKey, referenceKey]));
	const driver = laps.find(({ lap_public_id }) => lap_public_id.equals(lapKey));
	const reference = laps.find(({ lap_public_id }) => lap_public_id.equals(referenceKey));
	if (!driver || !reference) notFound();
	if (
		driver.layout_id !== reference.layout_id ||
		driver.path_version !== reference.path_version ||
		driver.map_version !== reference.map_version
	) {
		error(409, { message: 'These laps were driven on different layouts.', code: 'different_layout', errorId: '' });
	}
	return { driver, reference };
}

function fairnessOf(driver: FoundLap, reference: FoundLap): Fairness[] {
	const notes: Fairness[] = [];
	if (driver.run_id !== reference.run_id) {
		if (driver.car_id === null || reference.car_id === null) notes.push('car_unknown');
		else if (driver.car_name !== reference.car_name) notes.push('other_car');
		if (driver.conditions === 'unknown' || reference.conditions === 'unknown') notes.push('conditions_unknown');
		else if (driver.conditions !== reference.conditions) notes.push('other_conditions');
		const bothPlaced = driver.place !== 'unknown' && reference.place !== 'unknown';
		if (bothPlaced && driver.place !== reference.place) notes.push('other_place');
	}
	if (driver.is_clean !== 1) notes.push('driver_lap_not_clean');
	if (reference.is_clean !== 1) notes.push('reference_not_clean');
	return notes;
}

async function listWarnings(db: Knex, analysisId: number): Promise<z.infer<typeof warningSchema>[]> {
	const row: unknown = await db('analyses').where({ id: analysisId }).first('warnings');
	return z.object({ warnings: z.array(warningSchema) }).parse(row).warnings;
}
