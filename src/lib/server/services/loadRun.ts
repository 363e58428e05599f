import type { Knex } from 'knex';
import { z } from 'zod';
import { pathOriginSchema, warningSchema } from '../../schemas/analysisDocument.ts';
import type { RunView } from '../../schemas/views.ts';
import { keptPeople } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { listFoundLaps, listLapRows, listMetrics, seenLaps } from '../db/lapRepository.ts';
import { listLayoutHeads } from '../db/layoutHeads.ts';
import { getCornerMap } from '../db/layoutRepository.ts';
import { decodePublicId, encodePublicId } from '../db/publicId.ts';
import { listFoundRuns, seenRunRows, toRunListItem, type FoundRun } from '../db/runRepository.ts';
import { notFound } from '../http/notFound.ts';
import { listReferences, suggestPair, toHeads } from './chooseReference.ts';
import { cornerSpreads } from './cornerSpreads.ts';

const analysisSchema = z.object({
	layout_id: z.number(),
	path_version: z.number(),
	map_version: z.number(),
	sample_rate_hz: z.number(),
	channels: z.array(z.string()),
	warnings: z.array(warningSchema),
	origin: pathOriginSchema
});

/**
 * One run with its laps, corners, spread and what to lay on what.
 *
 * @throws 404 when there is no such run, or the viewer may not see it
 */
export async function loadRun(viewer: Viewer, runId: string): Promise<RunView> {
	const db = database();
	const run = await findRun(db, viewer, runId);
	if (!run) notFound();
	const [analysis, layouts, lapRows, metrics, runLaps, kept, upload] = await Promise.all([
		getAnalysis(db, run.analysis_id),
		listLayoutHeads(db, viewer, [run.layout_id]),
		listLapRows(db, [run.run_id]),
		listMetrics(db, [run.run_id]),
		listFoundLaps(seenLaps(db, viewer).where('laps.run_id', run.run_id).orderBy('laps.ordinal')),
		keptPeople(db, viewer),
		findFile(db, run.upload_id)
	]);
	const layout = layouts.get(run.layout_id) ?? notFound();
	const version = {
		layoutId: analysis.layout_id,
		pathVersion: analysis.path_version,
		mapVersion: analysis.map_version
	};
	const [map, references] = await Promise.all([
		getCornerMap(db, version),
		listReferences(db, viewer, { ...version, carId: run.car_id })
	]);
	const laps = lapRows.get(run.run_id) ?? [];
	const mayEdit = kept.includes(run.owner_id);
	return {
		...toRunListItem(run, layout, viewer),
		layout,
		intent: run.intent,
		tyreSet: run.tyre_set,
		fuelKg: run.fuel_kg,
		upload: mayEdit ? upload : null,
		sampleRateHz: analysis.sample_rate_hz,
		pathOrigin: analysis.origin,
		channels: analysis.channels,
		warnings: analysis.warnings,
		laps,
		corners: map.corners.map(({ corner }) => corner),
		cells: map.cells,
		spread: cornerSpreads(laps, metrics.get(run.run_id)?.metrics ?? []),
		suggestion: suggestPair(viewer, runLaps, references),
		references: toHeads(references, viewer),
		mayEdit
	};
}

export async function findRun(db: Knex, viewer: Viewer, runId: string): Promise<FoundRun | undefined> {
	const publicId = decodePublicId(runId);
	if (!publicId) return undefined;
	const [run] = await listFoundRuns(seenRunRows(db, viewer).where('runs.public_id', publicId));
	return run;
}

async function getAnalysis(db: Knex, analysisId: number): Promise<z.infer<typeof analysisSchema>> {
	const found: unknown = await db('analyses')
		.join('path_versions', (on) =>
			on.on('path_versions.layout_id', 'analyses.layout_id').andOn('path_versions.version', 'analyses.path_version')
		)
		.where('analyses.id', analysisId)
		.first(
			'analyses.layout_id',
			'analyses.path_version',
			'analyses.map_version',
			'analyses.sample_rate_hz',
			'analyses.channels',
			'analyses.warnings',
			'path_versions.origin'
		);
	return analysisSchema.parse(found);
}

async function findFile(db: Knex, uploadId: number | null): Promise<RunView['upload']> {
	if (uploadId === null) return null;
	const row = await db('uploads')
		.where({ id: uploadId })
		.first<{ public_id: Buffer; file_name: string } | undefined>('public_id', 'file_name');
	return row ? { id: encodePublicId(row.public_id), fileName: row.file_name } : null;
}
