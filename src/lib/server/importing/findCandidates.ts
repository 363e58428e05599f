import type { Knex } from 'knex';
import { cornerSchema } from '../../schemas/analysisDocument.ts';
import { seenLayouts } from '../access/seenLayouts.ts';
import { seenOwners } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { getCornerMap, getPath } from '../db/layoutRepository.ts';
import type { LayoutCandidate, LayoutFingerprint } from './importMessages.ts';

/** Wider than what counts as the same length, so that the thread decides. */
const LENGTH_TOLERANCE = 0.03;
/** A circuit's middle lies this near to a run's middle, whatever part of it was driven. */
const NEAR_DEG = 0.15;
const MOST = 12;

/**
 * Layouts that the run's owner may see and that the run may have been driven on, likeliest first.
 *
 * @param uploadId a layout that stands on nothing but this upload is no candidate when its path was of another origin: the new
 *   reading knows better
 */
export async function findCandidates(
	db: Knex,
	owner: Viewer,
	fingerprint: LayoutFingerprint,
	uploadId: number
): Promise<LayoutCandidate[]> {
	const { lengthM, centre, origin } = fingerprint;
	const owners = await seenOwners(db, owner);
	const query = db('layouts')
		.join('circuits', 'circuits.id', 'layouts.circuit_id')
		.join('path_versions', (on) =>
			on.on('path_versions.layout_id', 'layouts.id').andOn('path_versions.version', 'layouts.path_version')
		)
		.where(seenLayouts(db, owner, owners))
		.where((kept) =>
			kept.where('path_versions.origin', origin).orWhereRaw(
				// Not EXISTS: the optimiser would gather every run there is to answer it.
				'(SELECT 1 FROM runs AS first_other WHERE first_other.layout_id = layouts.id AND NOT (first_other.upload_id <=> ?) LIMIT 1) IS NOT NULL',
				[uploadId]
			)
		);
	if (lengthM !== null) {
		query.whereBetween('layouts.length_m', [lengthM * (1 - LENGTH_TOLERANCE), lengthM * (1 + LENGTH_TOLERANCE)]);
		query.orderByRaw('ABS(layouts.length_m - ?)', [lengthM]);
	}
	if (centre) {
		query.where((near) =>
			near
				.whereNull('layouts.centre_latitude_deg')
				.orWhere((place) =>
					place
						.whereBetween('layouts.centre_latitude_deg', [centre.latitudeDeg - NEAR_DEG, centre.latitudeDeg + NEAR_DEG])
						.whereBetween('layouts.centre_longitude_deg', [
							centre.longitudeDeg - NEAR_DEG,
							centre.longitudeDeg + NEAR_DEG
						])
				)
		);
	} else if (lengthM === null) return [];
	const rows = await query.limit(MOST).select<LayoutRow[]>('layouts.id', 'layouts.path_version', 'layouts.map_version');
	const candidates: LayoutCandidate[] = [];
	for (const row of rows) candidates.push(await loadCandidate(db, row));
	return candidates;
}

/** The layout that a person chose for a run of an upload; null where nobody did. */
export async function findChosenLayout(db: Knex, uploadId: number, runIndex: number): Promise<LayoutCandidate | null> {
	const row = await db('runs')
		.join('layouts', 'layouts.id', 'runs.chosen_layout_id')
		.where({ 'runs.upload_id': uploadId, 'runs.run_index': runIndex })
		.first<LayoutRow | undefined>('layouts.id', 'layouts.path_version', 'layouts.map_version');
	return row ? { ...(await loadCandidate(db, row)), chosen: true } : null;
}

interface LayoutRow {
	id: number;
	path_version: number;
	map_version: number;
}

async function loadCandidate(db: Knex, row: LayoutRow): Promise<LayoutCandidate> {
	const version = { layoutId: row.id, pathVersion: row.path_version, mapVersion: row.map_version };
	const { corners, cells } = await getCornerMap(db, version);
	return {
		...version,
		path: await getPath(db, version),
		corners: corners.map(({ corner }) => cornerSchema.parse(corner)),
		cells
	};
}
