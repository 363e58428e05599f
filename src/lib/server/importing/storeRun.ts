import type { Knex } from 'knex';
import type { LapDocument } from '../../schemas/analysisDocument.ts';
import type { ColumnMapping } from '../../schemas/columnMapping.ts';
import { US_PER_S } from '../../units.ts';
import { carOfMetadata } from '../db/carRepository.ts';
import { executePrepared } from '../db/executePrepared.ts';
import { getCornerMap, insertLayout, removeUnusedLayout, type LayoutVersion } from '../db/layoutRepository.ts';
import { toMetricsRow } from '../db/metricsRow.ts';
import { newPublicId } from '../db/publicId.ts';
import type { AnalysedRun } from './importMessages.ts';

/** Raise it when the same file would give other numbers, so that stored runs can be told to be analysed again. */
export const CODE_VERSION = 'analysis/2';
/** Rows of metrics in one statement. */
const METRICS_AT_ONCE = 100;
/** Moves the laps of the earlier reading out of the way of the new order; a run has fewer laps than this. */
const ASIDE = 20_000;

export interface RunPlace {
	uploadId: number;
	ownerId: number;
	/** 1 for the first run of the file */
	runIndex: number;
	storedAt: Date;
	mapping: ColumnMapping | null;
	/** layouts of the earlier runs of this file */
	earlier?: readonly LayoutVersion[];
	/** a run that was deleted stays so: nobody asked for it to be read again */
	staysDeleted?: boolean;
}

/**
 * Stores one run, or puts a new reading in the place of an earlier one: laps keep their ids where their number is the same, so
 * that links, references and notes go on to point at them.
 *
 * @returns the layout that the run lies on
 */
export async function storeRun(trx: Knex.Transaction, place: RunPlace, analysed: AnalysedRun): Promise<LayoutVersion> {
	const before = await trx('runs')
		.where({ upload_id: place.uploadId, run_index: place.runIndex })
		.first<{ id: number; layout_id: number; car_id: number | null; started_at: Date | null } | undefined>(
			'id',
			'layout_id',
			'car_id',
			'started_at'
		);
	const version = await storeLayout(trx, place, analysed);
	const carId = before?.car_id ?? (await carOfMetadata(trx, place.ownerId, analysed.document.source.metadata));
	if (carId !== null) await freezeBrake(trx, carId, analysed);
	const startedAt = before?.started_at ?? (analysed.startedAtMs === null ? null : new Date(analysed.startedAtMs));
	const row = {
		layout_id: version.layoutId,
		car_id: carId,
		started_at: startedAt,
		sort_at: startedAt ?? place.storedAt,
		...(!place.staysDeleted && { deleted_at: null })
	};
	let runId: number;
	if (before) {
		runId = before.id;
		await trx('runs')
			.where({ id: runId })
			.update({ ...row, best_lap_id: null, analysis_id: null });
	} else {
		[runId] = await trx('runs').insert({
			...row,
			public_id: newPublicId(),
			owner_id: place.ownerId,
			upload_id: place.uploadId,
			run_index: place.runIndex
		});
	}
	const analysisId = await storeAnalysis(trx, runId, version, place.mapping, analysed);
	const lapIds = await storeLaps(trx, runId, analysisId, analysed);
	await storeTraces(trx, lapIds, analysed);
	await storeMetrics(trx, lapIds, version, analysed);
	await trx('analyses').where({ run_id: runId }).whereNot({ id: analysisId }).delete();
	await trx('runs')
		.where({ id: runId })
		.update({ analysis_id: analysisId, ...summaryOf(analysed, lapIds) });
	if (before && before.layout_id !== version.layoutId) await removeUnusedLayout(trx, before.layout_id);
	return version;
}

async function storeLayout(
	trx: Knex.Transaction,
	place: RunPlace,
	{ layout, document }: AnalysedRun
): Promise<LayoutVersion> {
	if ('known' in layout) return layout.known;
	if ('sameAs' in layout) {
		const version = place.earlier?.[layout.sameAs];
		if (!version) throw new RangeError(`storeRun requires the layout of run ${layout.sameAs + 1} of the file`);
		return version;
	}
	const { corners, cells } = document;
	return await insertLayout(trx, { path: layout.path, corners, cells, createdBy: place.ownerId });
}

/** A pressure without a known full value is scaled by the car's first run, and from then on by the same value. */
async function freezeBrake(trx: Knex.Transaction, carId: number, { brake }: AnalysedRun): Promise<void> {
	if (!brake.scaleAssumed || brake.full === null || brake.unit === null) return;
	await trx('cars')
		.where({ id: carId })
		.whereNull('brake_full')
		.update({ brake_full: brake.full, brake_unit: brake.unit });
}

async function storeAnalysis(
	trx: Knex.Transaction,
	runId: number,
	version: LayoutVersion,
	mapping: ColumnMapping | null,
	analysed: AnalysedRun
): Promise<number> {
	const { document, brake } = analysed;
	const [analysisId]: number[] = await trx('analyses').insert({
		run_id: runId,
		code_version: CODE_VERSION,
		mapping: mapping && JSON.stringify(mapping),
		layout_id: version.layoutId,
		path_version: version.pathVersion,
		map_version: version.mapVersion,
		sample_rate_hz: document.source.sampleRateHz,
		channels: JSON.stringify(analysed.channels),
		warnings: JSON.stringify(document.source.warnings),
		lock_ups: JSON.stringify(document.lockUps),
		full_throttle: analysed.fullThrottle && JSON.stringify(analysed.fullThrottle),
		brake_unit: brake.unit,
		brake_full: brake.full,
		brake_scale_assumed: brake.scaleAssumed,
		speed_strip: JSON.stringify(analysed.speedStrip)
	});
	return analysisId;
}

/** @returns key of each lap by its number */
async function storeLaps(
	trx: Knex.Transaction,
	runId: number,
	analysisId: number,
	analysed: AnalysedRun
): Promise<Map<number, number>> {
	const rows = await trx('laps').where({ run_id: runId }).select<{ id: number; number: number }[]>('id', 'number');
	const before = new Map(rows.map(({ id, number }) => [number, id]));
	if (rows.length > 0) await trx('laps').where({ run_id: runId }).increment('ordinal', ASIDE);
	const lapIds = new Map<number, number>();
	const grids = new Map(analysed.laps.map(({ number, grid }) => [number, grid]));
	for (const [ordinal, lap] of analysed.document.laps.entries()) {
		const grid = grids.get(lap.number) ?? null;
		const row = {
			...lapRow(lap),
			analysis_id: analysisId,
			ordinal,
			grid_length_m: grid?.lengthM ?? null,
			grid_margin_m: grid?.marginM ?? null
		};
		const known = before.get(lap.number);
		if (known !== undefined) {
			before.delete(lap.number);
			await trx('laps').where({ id: known }).update(row);
			lapIds.set(lap.number, known);
		} else {
			const [id]: number[] = await trx('laps').insert({ ...row, public_id: newPublicId(), run_id: runId });
			lapIds.set(lap.number, id);
		}
	}
	if (before.size > 0)
		await trx('laps')
			.whereIn('id', [...before.values()])
			.delete();
	return lapIds;
}

const toUs = (seconds: number): number => Math.round(seconds * US_PER_S);

function lapRow(lap: LapDocument) {
	return {
		number: lap.number,
		kind: lap.kind,
		start_us: toUs(lap.startS),
		time_us: toUs(lap.timeS),
		plus_minus_us: toUs(lap.plusMinusS),
		length_m: lap.lengthM,
		is_clean: lap.clean,
		reasons: JSON.stringify(lap.reasons),
		cell_us: JSON.stringify(lap.cellS.map((seconds) => (seconds === null ? null : toUs(seconds))))
	};
}

async function storeTraces(
	trx: Knex.Transaction,
	lapIds: ReadonlyMap<number, number>,
	analysed: AnalysedRun
): Promise<void> {
	await trx('lap_traces')
		.whereIn('lap_id', [...lapIds.values()])
		.delete();
	for (const { number, grid } of analysed.laps) {
		const lapId = lapIds.get(number);
		if (!grid || lapId === undefined || grid.columns.length === 0) continue;
		const places = grid.columns.map(() => '(?, ?, ?, ?, ?)').join(', ');
		await executePrepared(
			trx,
			`INSERT INTO lap_traces (lap_id, channel, version, scale, payload) VALUES ${places}`,
			grid.columns.flatMap(({ channel, version, scale, payload }) => [
				lapId,
				channel,
				version,
				scale,
				Buffer.from(payload)
			])
		);
	}
}

async function storeMetrics(
	trx: Knex.Transaction,
	lapIds: ReadonlyMap<number, number>,
	version: LayoutVersion,
	{ document }: AnalysedRun
): Promise<void> {
	await trx('lap_corner_metrics')
		.whereIn('lap_id', [...lapIds.values()])
		.delete();
	const { corners } = await getCornerMap(trx, version);
	const cornerIds = new Map(corners.map(({ cornerId, corner }) => [corner.number, cornerId]));
	const rows = document.metrics.flatMap((metrics) => {
		const lapId = lapIds.get(metrics.lap);
		const cornerId = cornerIds.get(metrics.corner);
		if (lapId === undefined || cornerId === undefined) return [];
		return [{ lap_id: lapId, corner_id: cornerId, ...toMetricsRow(metrics) }];
	});
	for (let i = 0; i < rows.length; i += METRICS_AT_ONCE) {
		await trx('lap_corner_metrics').insert(rows.slice(i, i + METRICS_AT_ONCE));
	}
}

/** What lists show of a run: best clean lap, else the fastest timed one. */
function summaryOf({ document }: AnalysedRun, lapIds: ReadonlyMap<number, number>) {
	const timed = document.laps.filter(({ kind }) => kind === 'timed');
	const clean = timed.filter((lap) => lap.clean);
	const [best] = [...(clean.length > 0 ? clean : timed)].sort((a, b) => a.timeS - b.timeS);
	const { theoreticalBestS } = document;
	return {
		timed_laps: timed.length,
		clean_laps: clean.length,
		best_lap_id: best ? (lapIds.get(best.number) ?? null) : null,
		best_time_us: best ? toUs(best.timeS) : null,
		best_is_clean: best?.clean ?? false,
		theoretical_best_us: theoreticalBestS === null ? null : toUs(theoreticalBestS)
	};
}
