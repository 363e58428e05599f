import type { Knex } from 'knex';
import { compareLaps } from '../../analysis/compare/compareLaps.ts';
import type { LapGrid } from '../../analysis/model.ts';
import { cornerSchema, type Comparison, type CornerMetrics } from '../../schemas/analysisDocument.ts';
import { gridOf, listMetrics, listTraces } from '../db/lapRepository.ts';
import type { PairLap } from '../db/pairRepository.ts';
import { notFound } from '../http/notFound.ts';
import { ContentCache } from './contentCache.ts';
import type { LayoutSheet } from './layoutSheet.ts';

/** What comparing two stored laps gives; depends on nothing but their analyses, so that it never grows old. */
export interface StoredComparison {
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

/**
 * Compares two laps out of what is stored of them; both lie on the sheet's path and corner map. Each pair is worked out once
 * for as long as it is kept.
 *
 * @throws 404 when one of them was not laid on the grid
 */
export async function compareStored(
	db: Knex,
	driver: PairLap,
	reference: PairLap,
	sheet: LayoutSheet
): Promise<StoredComparison> {
	const key = [driver.lap_id, driver.analysis_id, reference.lap_id, reference.analysis_id].join(':');
	const known = cache.get(key);
	if (known) return known;
	const [traces, metrics] = await Promise.all([
		listTraces(db, [driver.lap_id, reference.lap_id]),
		listMetrics(db, [...new Set([driver.run_id, reference.run_id])])
	]);
	const ownGrid = gridOf(driver, traces.get(driver.lap_id)) ?? notFound();
	const otherGrid = gridOf(reference, traces.get(reference.lap_id)) ?? notFound();
	const brakeScale = commonBrakeScale(driver, reference);
	const driverGrid = scaleGrid(ownGrid, brakeScale.driver);
	const referenceGrid = scaleGrid(otherGrid, brakeScale.reference);
	const run = metrics.get(driver.run_id);
	const runMetrics = scaleMetrics(run?.metrics ?? [], brakeScale.driver);
	const driverMetrics = runMetrics.filter(({ lap }) => lap === driver.number);
	const ofReference = metrics.get(reference.run_id)?.metrics.filter(({ lap }) => lap === reference.number) ?? [];
	const referenceMetrics = scaleMetrics(ofReference, brakeScale.reference);
	const comparison = compareLaps({
		driver: { grid: driverGrid, metrics: driverMetrics },
		reference: { grid: referenceGrid, metrics: referenceMetrics },
		corners: sheet.corners.map((corner) => cornerSchema.parse(corner)),
		run: { metrics: runMetrics, cleanLaps: run?.cleanLaps ?? [], fullThrottle: driver.full_throttle }
	});
	const stored = { comparison, driverMetrics, referenceMetrics, runMetrics, driverGrid, referenceGrid, brakeScale };
	cache.set(key, stored);
	return stored;
}

/** Where both runs only guess what full brake pressure is, the larger value serves both; else each keeps its own. */
function commonBrakeScale(driver: PairLap, reference: PairLap): StoredComparison['brakeScale'] {
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
	return metrics.map((entry) => ({
		...entry,
		peakPct: scaled(entry.peakPct),
		peakRawPct: scaled(entry.peakRawPct),
		holdPct: scaled(entry.holdPct ?? null)
	}));
}
