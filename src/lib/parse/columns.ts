import type { Channel } from '../schemas/channels.ts';
import type { Range } from './columnStore.ts';
import type { HelperColumn } from './recogniseColumns.ts';

export type Column = Float64Array | Float32Array;

/** The columns of a file by channel while they are worked on; all of one length. */
export type Columns = Map<Channel | HelperColumn, Column>;

/** Least and largest value by channel, kept in step with the columns. */
export type Ranges = Map<Channel | HelperColumn, Range>;

/** Channels that need more than the 24 bits of a single: a longitude to a millimetre, an epoch to a millisecond. */
const WIDE: ReadonlySet<string> = new Set([
	'time',
	'lapTime',
	'lastLapTime',
	'lap',
	'beacon',
	'distance',
	'lapDistance',
	'latitude',
	'longitude',
	'positionX',
	'positionY'
]);

export function isWide(channel: Channel | HelperColumn): boolean {
	return WIDE.has(channel);
}

/** The rows of a column that are kept, in order. */
export function pick(column: Column, rows: Int32Array): Column {
	const out = column instanceof Float64Array ? new Float64Array(rows.length) : new Float32Array(rows.length);
	for (let i = 0; i < rows.length; i++) out[i] = column[rows[i]];
	return out;
}

/** Steps looked at for a typical value: enough for a percentile, few enough to take no time in a long file. */
const MAX_SAMPLES = 20_000;

/**
 * Quantile of a column's finite values, from at most 20 000 evenly spread ones; NaN where there are none.
 *
 * @param share 0–1
 */
export function quantile(column: ArrayLike<number>, share: number): number {
	const stride = Math.max(1, Math.ceil(column.length / MAX_SAMPLES));
	const values = new Float64Array(Math.ceil(column.length / stride));
	let count = 0;
	for (let i = 0; i < column.length; i += stride) if (Number.isFinite(column[i])) values[count++] = column[i];
	if (count === 0) return NaN;
	const sorted = values.subarray(0, count).sort();
	return sorted[Math.min(count - 1, Math.max(0, Math.round(share * (count - 1))))];
}

/** Least and largest value of a column; both NaN where there is none. */
export function rangeOf(column: Column): Range {
	let [min, max] = [Infinity, -Infinity];
	for (let i = 0; i < column.length; i++) {
		const value = column[i];
		if (value < min) min = value;
		if (value > max) max = value;
	}
	return min <= max ? { min, max } : { min: NaN, max: NaN };
}

/** Median of the positive steps of a column. */
export function typicalStep(column: ArrayLike<number>): number {
	const stride = Math.max(1, Math.ceil(column.length / MAX_SAMPLES));
	const steps: number[] = [];
	for (let i = 1; i < column.length; i += stride) {
		const step = column[i] - column[i - 1];
		if (step > 0) steps.push(step);
	}
	return quantile(steps, 0.5);
}
