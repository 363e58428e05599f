import { metricsSchema, type CornerMetrics } from '../../schemas/analysisDocument.ts';

/** Each metric and its column in `lap_corner_metrics`. A metric without one does not compile. */
export const METRIC_COLUMNS = {
	onsetM: 'onset_m',
	onsetS: 'onset_s',
	peakPct: 'peak_pct',
	peakRawPct: 'peak_raw_pct',
	peakM: 'peak_m',
	riseS: 'rise_s',
	releaseStartM: 'release_start_m',
	releaseEndM: 'release_end_m',
	releaseS: 'release_s',
	lightHoldS: 'light_hold_s',
	trailS: 'trail_s',
	trailM: 'trail_m',
	turnInM: 'turn_in_m',
	entryKmh: 'entry_kmh',
	minKmh: 'min_kmh',
	minSpeedM: 'min_speed_m',
	liftM: 'lift_m',
	smallestOpeningPct: 'smallest_opening_pct',
	smallestOpeningM: 'smallest_opening_m',
	pickUpM: 'pick_up_m',
	fullThrottleM: 'full_throttle_m',
	secondLiftS: 'second_lift_s',
	overlapS: 'overlap_s',
	coastingS: 'coasting_s',
	exitKmh: 'exit_kmh',
	idleGapS: 'idle_gap_s',
	timeS: 'time_s',
	releaseProgressive: 'release_progressive',
	dabs: 'dabs',
	lockUps: 'lock_ups',
	coastBeforeS: 'coast_before_s',
	coastBetweenS: 'coast_between_s',
	coastAfterS: 'coast_after_s',
	holdPct: 'hold_pct',
	brakedMps2: 'braked_mps2',
	spinS: 'spin_s',
	steerCorrections: 'steer_corrections',
	rearLocks: 'rear_locks',
	lockWheels: 'lock_wheels'
} as const satisfies Record<Exclude<keyof CornerMetrics, 'lap' | 'corner' | 'plusMinus' | 'reasons'>, string>;

type MetricName = keyof typeof METRIC_COLUMNS;
const NAMES = Object.keys(METRIC_COLUMNS) as MetricName[];

/** A row of the table, without the keys of lap and corner. */
export function toMetricsRow(metrics: CornerMetrics): Record<string, number | boolean | string | null> {
	const row: Record<string, number | boolean | string | null> = {
		number: metrics.corner,
		plus_minus: JSON.stringify(metrics.plusMinus),
		reasons: JSON.stringify(metrics.reasons)
	};
	for (const name of NAMES) row[METRIC_COLUMNS[name]] = metrics[name] ?? null;
	return row;
}

/** @param lap number of the lap within its run */
export function fromMetricsRow(lap: number, row: Record<string, unknown>): CornerMetrics {
	const metrics: Record<string, unknown> = { lap, corner: row.number, plusMinus: row.plus_minus, reasons: row.reasons };
	for (const name of NAMES) metrics[name] = row[METRIC_COLUMNS[name]];
	// MariaDB has no boolean: a small integer stands for it.
	if (metrics.releaseProgressive !== null) metrics.releaseProgressive = metrics.releaseProgressive === 1;
	return metricsSchema.parse(metrics);
}

/** Columns to select. */
export const METRIC_COLUMN_LIST: readonly string[] = [
	'number',
	'plus_minus',
	'reasons',
	...Object.values(METRIC_COLUMNS)
].map((column) => `lap_corner_metrics.${column}`);
