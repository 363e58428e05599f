import type { Knex } from 'knex';
import { z } from 'zod';
import { cornerSchema, type AnalysisDocument } from '../../schemas/analysisDocument.ts';
import { brakeUnitSchema } from '../../schemas/channels.ts';
import { columnMappingSchema } from '../../schemas/columnMapping.ts';
import { US_PER_S } from '../../units.ts';
import { findMap, type StoredMap } from '../db/cornerMapRepository.ts';
import { getPath } from '../db/layoutRepository.ts';
import { toMetricsRow } from '../db/metricsRow.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import type { LayoutCandidate } from '../importing/importMessages.ts';
import type { JobPayload } from '../jobs/jobKinds.ts';
import { finish, holdJob, type ClaimedJob } from '../jobs/jobQueue.ts';
import { logger } from '../logger.ts';
import { FileMissing, withLocalFile } from '../storage/rawStore.ts';
import type { ImportTools } from './importRun.ts';

const METRICS_AT_ONCE = 100;
/** Runs that arrive while the others are cut are cut too; a queue that never ends is a fault. */
const MOST_ROUNDS = 20;

const runRowSchema = z.object({
	run_id: z.number(),
	run_index: z.number(),
	analysis_id: z.number(),
	upload_id: z.number(),
	file_name: z.string(),
	size_bytes: z.number(),
	storage_key: z.string(),
	mapping: columnMappingSchema.nullable(),
	brake_unit: brakeUnitSchema.nullable(),
	brake_full: z.number().nullable()
});
type RunRow = z.infer<typeof runRowSchema>;

/** What is stored of a run anew; null for a run whose file cannot be read again, which stays on its version. */
type Cut = Pick<AnalysisDocument, 'laps' | 'metrics' | 'theoreticalBestS'> | null;

/**
 * Cuts every stored lap of a layout by a version of its corner map: each raw file is read and measured again, then all of it and the
 * version itself begin to count in one transaction. Laps keep their ids, times and traces. Runs that are stored meanwhile are cut
 * before it ends. A run whose file is gone or no longer reads keeps the numbers and the version that it has.
 *
 * @param signal ends the thread; nothing was stored yet
 */
export async function recutLayout(
	tools: ImportTools,
	job: ClaimedJob,
	{ layoutId, mapVersion }: JobPayload<'recutLayout'>,
	signal: AbortSignal
): Promise<void> {
	const { db } = tools;
	const map = await findMap(db, layoutId, mapVersion);
	if (!map) return await finish(db, job);
	const path = await getPath(db, { layoutId, pathVersion: map.pathVersion });
	const layout: LayoutCandidate = {
		layoutId,
		pathVersion: map.pathVersion,
		mapVersion,
		path,
		corners: map.corners.map((corner) => cornerSchema.parse(corner)),
		cells: map.cells,
		chosen: true
	};
	const cuts = new Map<number, { run: RunRow; cut: Cut }>();
	for (let round = 0; round < MOST_ROUNDS; round++) {
		for (const run of await runsToCut(db, layoutId, mapVersion)) {
			if (cuts.has(run.analysis_id)) continue;
			cuts.set(run.analysis_id, { run, cut: await cutAgain(tools, run, layout, signal) });
		}
		const stored = await retryOnDeadlock(db, async (trx) => {
			await holdJob(trx, job);
			await trx('layouts').where({ id: layoutId }).forUpdate().first('id');
			const now = await runsToCut(trx, layoutId, mapVersion);
			if (now.some((run) => !cuts.has(run.analysis_id))) return false;
			for (const { analysis_id } of now) {
				const known = cuts.get(analysis_id);
				if (known?.cut) await storeCut(trx, known.run, known.cut, map, mapVersion);
			}
			await trx('layouts').where({ id: layoutId }).update({ map_version: mapVersion });
			await finish(trx, job);
			return true;
		});
		if (stored) return;
	}
	throw new Error(`layout ${layoutId} gets runs faster than they can be cut`);
}

/** Takes back a version that could not be cut, so that the map can be edited again. */
export async function giveUpRecut(db: Knex, { layoutId, mapVersion }: JobPayload<'recutLayout'>): Promise<void> {
	await db('corner_maps')
		.where({ layout_id: layoutId, version: mapVersion })
		.where('version', '>', db('layouts').where({ id: layoutId }).select('map_version'))
		.delete();
}

async function runsToCut(db: Knex, layoutId: number, mapVersion: number): Promise<RunRow[]> {
	const rows: unknown = await db('runs')
		.join('analyses', 'analyses.id', 'runs.analysis_id')
		.join('uploads', 'uploads.id', 'runs.upload_id')
		.where({ 'runs.layout_id': layoutId })
		.whereNot({ 'analyses.map_version': mapVersion })
		.orderBy(['runs.upload_id', 'runs.run_index'])
		.select(
			'runs.id as run_id',
			'runs.run_index',
			'runs.upload_id',
			'analyses.id as analysis_id',
			'analyses.mapping',
			'analyses.brake_unit',
			'analyses.brake_full',
			'uploads.file_name',
			'uploads.size_bytes',
			'uploads.storage_key'
		);
	return z.array(runRowSchema).parse(rows);
}

async function cutAgain(
	{ store, pool }: ImportTools,
	run: RunRow,
	layout: LayoutCandidate,
	signal: AbortSignal
): Promise<Cut> {
	const { file_name: fileName, size_bytes: sizeBytes, mapping, brake_unit: unit, brake_full: full } = run;
	try {
		return await withLocalFile(store, run.storage_key, async (path) => {
			const answer = await pool.run(
				{ path, sizeBytes, fileName, mapping, looksForMapping: false },
				{
					progress: () => {},
					mapping: async () => null,
					brake: async () => (unit !== null && full !== null ? { unit, full } : null),
					candidates: async (_, runIndex) => (runIndex === run.run_index ? [layout] : [])
				},
				signal
			);
			if ('refusal' in answer) return null;
			const analysed = answer.runs[run.run_index - 1];
			const fits = analysed && 'known' in analysed.layout && analysed.layout.known.layoutId === layout.layoutId;
			return fits ? analysed.document : null;
		});
	} catch (error) {
		if (!(error instanceof FileMissing)) throw error;
		logger.warn({ run: run.run_id }, 'raw file is gone; the run keeps its corner map');
		return null;
	}
}

async function storeCut(
	trx: Knex.Transaction,
	run: RunRow,
	cut: NonNullable<Cut>,
	map: StoredMap,
	mapVersion: number
): Promise<void> {
	const rows = await trx('laps').where({ run_id: run.run_id }).select<{ id: number; number: number }[]>('id', 'number');
	const lapIds = new Map(rows.map(({ id, number }) => [number, id]));
	const cornerIds = new Map(map.corners.map(({ id, number }) => [number, map.keys.get(id)]));
	for (const { number, cellS } of cut.laps) {
		const cells = cellS.map((seconds) => (seconds === null ? null : toUs(seconds)));
		await trx('laps')
			.where({ run_id: run.run_id, number })
			.update({ cell_us: JSON.stringify(cells) });
	}
	await trx('lap_corner_metrics')
		.whereIn('lap_id', [...lapIds.values()])
		.delete();
	const metrics = cut.metrics.flatMap((one) => {
		const lapId = lapIds.get(one.lap);
		const cornerId = cornerIds.get(one.corner);
		return lapId === undefined || cornerId === undefined
			? []
			: [{ lap_id: lapId, corner_id: cornerId, ...toMetricsRow(one) }];
	});
	for (let i = 0; i < metrics.length; i += METRICS_AT_ONCE)
		await trx('lap_corner_metrics').insert(metrics.slice(i, i + METRICS_AT_ONCE));
	await trx('analyses').where({ id: run.analysis_id }).update({ map_version: mapVersion });
	await trx('runs')
		.where({ id: run.run_id })
		.update({ theoretical_best_us: cut.theoreticalBestS === null ? null : toUs(cut.theoreticalBestS) });
}

const toUs = (seconds: number): number => Math.round(seconds * US_PER_S);
