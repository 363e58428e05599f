import type { AnalysedRun } from './importMessages.ts';

const STRIP_COLUMNS = 600;
/** km/h, one decimal: a strip is looked at, not measured. */
const PER_KMH = 10;

/**
 * The run's speed over time in at most 600 columns, lowest and highest value of each, so that a picture of it shows every dip
 * however long the run is.
 *
 * @param timeS strictly increasing, from 0
 * @param speedKmh same length; NaN is a gap
 */
export function speedStrip(timeS: Float64Array, speedKmh: Float64Array): AnalysedRun['speedStrip'] {
	const durationS = timeS[timeS.length - 1];
	const columns = Math.min(STRIP_COLUMNS, timeS.length);
	const low = new Float64Array(columns).fill(Infinity);
	const high = new Float64Array(columns).fill(-Infinity);
	for (let i = 0; i < timeS.length; i++) {
		const column = Math.min(columns - 1, Math.floor((timeS[i] / durationS) * columns));
		if (speedKmh[i] < low[column]) low[column] = speedKmh[i];
		if (speedKmh[i] > high[column]) high[column] = speedKmh[i];
	}
	const rounded = (values: Float64Array) =>
		Array.from(values, (value) => (Number.isFinite(value) ? Math.round(value * PER_KMH) / PER_KMH : null));
	return { durationS, lowKmh: rounded(low), highKmh: rounded(high) };
}
