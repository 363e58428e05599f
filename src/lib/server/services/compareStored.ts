import { createHash } from 'node:crypto';
import type { Knex } from 'knex';
import { z } from 'zod';
import type { FullThrottleModel } from '../../analysis/car/fullThrottle.ts';
import { compareLaps } from '../../analysis/compare/compareLaps.ts';
import type { LapGrid, ReferencePath } from '../../analysis/model.ts';
import { cornerSchema, type Cell, type Comparison, type CornerMetrics } from '../../schemas/analysisDocument.ts';
import { brakeUnitSchema } from '../../schemas/channels.ts';
import type { CornerView } from '../../schemas/views.ts';
import { gridOf, listMetrics, listTraces, type FoundLap } from '../db/lapRepository.ts';
import { getCornerMap, getPath } from '../db/layoutRepository.ts';
import { ContentCache } from './contentCache.ts';

/** What comparing two stored laps gives; depends on nothing but their analyses, so that it never grows old. */
export interface StoredComparison {
	path: ReferencePath;
	corners: CornerView[];
	cells: Cell[];
	comparison: Comparison;
	driverMetrics: CornerMetrics[];
	referenceMetrics: CornerMetrics[];
	runMetrics: CornerMetrics[];
	driverGrid: LapGrid;
	referenceGrid: LapGrid;
	brakeScale: { driver: number; reference: number };
}

/** A pair is about 1 MB. */
const KEPT_PAIRS = 40;
const cache = new ContentCache<StoredComparison>(KEPT_PAIRS);

const analysisSchema = z.object({
	id: z.number(),
	brake_unit: brakeUnitSchema.nullable(),
	brake_full: z.number().nullable(),
	brake_scale_assumed: z.number(),
	full_throttle: z.custom<FullThrottleModel>((value) => value === null || typeof value === 'object').nullable()
});
type Analysis = z.infer<typeof analysisSchema>;

/** Names of corners change without a new analysis, so they are part of what the answer depends on. */
export function pairHash(driver: FoundLap, reference: FoundLap, corners: readonly CornerView[]): string {
	const names = corners.map(({ id, name }) => [id, name]);
	return createHash('sha256')
		.update(JSON.stringify([driver.lap_id, driver.analysis_id, reference.lap_id, reference.analysis_id, names]))
		.digest('hex');
}

/**
 * Compares two laps out of what is stored of them; both lie on the same path and corner map.
 *
 * @returns null when one of them was not laid on the grid
 */
export async function compareStored(
	db: Knex,
	driver: FoundLap,
	reference: FoundLap
): Promise<{ hash: string; stored: StoredComparison } | null> {
	const version = { layoutId: driver.layout_id, pathVersion: driver.path_version, mapVersion: driver.map_version };
	const { corners: storedCorners, cells } = await getCornerMap(db, version);
	const corners = storedCorners.map(({ corner }) => corner);
	const hash = pairHash(driver, reference, corners);
	const known = cache.get(hash);
	if (known) return { hash, stored: known };
	const [path, traces, metrics, cleanLaps, analyses] = await Promise.all([
		getPath(db, version),
		listTraces(db, [driver.lap_id, reference.lap_id]),
		listMetrics(db, [...new Set([driver.run_id, reference.run_id])]),
		listCleanLaps(db, driver.run_id),
		getAnalyses(db, driver, reference)
	]);
	const rawDriverGrid = gridOf(driver, traces.get(driver.lap_id));
	const rawReferenceGrid = gridOf(reference, traces.get(reference.lap_id));
	if (!rawDriverGrid || !rawReferenceGrid) return null;
	const scale = commonBrakeScale(analyses.driver, analyses.reference);
	const driverGrid = scaleGrid(rawDriverGrid, scale.driver);
	const referenceGrid = scaleGrid(rawReferenceGrid, scale.reference);
	const runMetrics = scaleMetrics(metrics.get(driver.run_id) ?? [], scale.driver);
	const driverMetrics = runMetrics.filter(({ lap }) => lap === driver.number);
	const referenceMetrics = scaleMetrics(
		(metrics.get(reference.run_id) ?? []).filter(({ lap }) => lap === reference.number),
		scale.reference
	);
	const comparison = compareLaps({
		driver: { grid: driverGrid, metrics: driverMetrics },
		reference: { grid: referenceGrid, metrics: referenceMetrics },
		corners: corners.map((corner) => cornerSchema.parse(corner)),
		run: { metrics: runMetrics, cleanLaps, fullThrottle: analyses.driver.full_throttle }
	});
	const stored = {
		path,
		corners,
		cells,
		comparison,
		driverMetrics,
		referenceMetrics,
		runMetrics,
		driverGrid,
		referenceGrid,
		brakeScale: scale
	};
	cache.set(hash, stored);
	return { hash, stored };
}

async function listCleanLaps(db: Knex, runId: number): Promise<number[]> {
	const rows = await db('laps')
		.where({ run_id: runId, is_clean: true })
		.orderBy('ordinal')
		.select<{ number: number }[]>('number');
	return rows.map(({ number }) => number);
}

async function getAnalyses(
	db: Knex,
	driver: FoundLap,
	reference: FoundLap
): Promise<{ driver: Analysis; reference: Analysis }> {
	const found: unknown = await db('analyses')
		.whereIn('id', [driver.analysis_id, reference.analysis_id])
		.select(Object.keys(analysisSchema.shape));
	const analyses = new Map(
		z
			.array(analysisSchema)
			.parse(found)
			.map((row) => [row.id, row])
	);
	const own = analyses.get(driver.analysis_id);
	const other = analyses.get(reference.analysis_id);
	if (!own || !other) throw new Error('compareStored requires laps whose analyses are stored');
	return { driver: own, reference: other };
}

/** Where both runs only guess what full brake pressure is, the larger value serves both; else each keeps its own. */
function commonBrakeScale(driver: Analysis, reference: Analysis): { driver: number; reference: number } {
	const bothGuess = driver.brake_scale_assumed === 1 && reference.brake_scale_assumed === 1;
	if (!bothGuess || driver.brake_unit !== reference.brake_unit || !driver.brake_full || !reference.brake_full) {
		return { driver: 1, reference: 1 };
	}
	const full = Math.max(driver.brake_full, reference.brake_full);
	return { driver: driver.brake_full / full, reference: reference.brake_full / full };
}

function scaleGrid(grid: LapGrid, factor: number): LapGrid {
	if (factor === 1 || !grid.brakePct) return grid;
	return { ...grid, brakePct: grid.brakePct.map((value) => value * factor) };
}

function scaleMetrics(metrics: CornerMetrics[], factor: number): CornerMetrics[] {
	if (factor === 1) return metrics;
	const scaled = (value: number | null) => (value === null ? null : value * factor);
	return metrics.map((entry) => ({ ...entry, peakPct: scaled(entry.peakPct), peakRawPct: scaled(entry.peakRawPct) }));
}
