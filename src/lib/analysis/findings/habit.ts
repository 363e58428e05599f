import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import { differenceOf, type MetricField } from './difference.ts';

const LEAST_LAPS = 5;
const HABIT_SHARE = 0.7;
const LEAST_COST_S = 0.02;

export interface Habit {
	habit: boolean | null;
	laps: { shown: number; of: number } | null;
}

/**
 * Is a finding a habit: outside its ± and worth at least 0.02 s in at least 70 % of at least five clean laps?
 *
 * What it costs in another lap is scaled from this lap's cost by the size of the difference, since only the metrics of the other laps
 * are held against the reference.
 *
 * @param field     metric that the finding stands on
 * @param thisLap   the driver's metrics of the compared lap, in this corner
 * @param reference the reference's metrics in this corner
 * @param laps      metrics of the run's clean laps in this corner
 * @returns nulls with fewer than five laps, or where the cost of the finding does not follow a metric
 */
export function judgeHabit(
	field: MetricField | null,
	costS: number,
	thisLap: CornerMetrics | undefined,
	reference: CornerMetrics | undefined,
	laps: readonly CornerMetrics[],
	lengthM: number
): Habit {
	if (field === null || laps.length < LEAST_LAPS || !thisLap || !reference || !(costS >= LEAST_COST_S))
		return { habit: null, laps: null };
	const pair = (driver: CornerMetrics) => ({ driver, reference, apexM: 0, lengthM });
	const own = differenceOf(pair(thisLap), field);
	const shown = laps.filter((lap) => {
		// what the reference does not do at all is shown by doing it
		if (own === null) return lap[field] !== null && thisLap[field] !== null;
		const other = differenceOf(pair(lap), field);
		return other !== null && other.counts && (costS * other.by) / own.by >= LEAST_COST_S;
	}).length;
	return { habit: shown >= HABIT_SHARE * laps.length, laps: { shown, of: laps.length } };
}
