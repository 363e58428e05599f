import type { RowKey } from './traceRows.ts';

type Column = ArrayLike<number> | null;

/** Both laps by the metre: one entry a metre from `fromM` on; NaN is a gap, null an absent channel. */
export interface StretchColumns {
	fromM: number;
	driver: Record<RowKey, Column>;
	reference: Record<RowKey, Column>;
	/** driver’s time minus reference’s since each crossed the line, s */
	apartS: ArrayLike<number>;
}

export interface StretchSide {
	mean: number;
	lowest: number;
	highest: number;
	/** does a part of the stretch lack values, which then count for nothing */
	hasGap: boolean;
}

/** What a stretch of the path says by itself. */
export interface StretchFigures {
	/** m, whole, from < to */
	fromM: number;
	toM: number;
	/** what the stretch costs, s; null where one of its ends is in a gap */
	deltaS: number | null;
	rows: { key: RowKey; driver: StretchSide | null; reference: StretchSide | null }[];
}

const KEYS: readonly RowKey[] = ['brake', 'speed', 'throttle', 'steering'];

/**
 * Δ, means and extremes of a stretch for both laps.
 *
 * Means are over distance by the trapezoid rule; the mean of speed is metres by time, ∫ds / ∫ds/v, as everybody understands it.
 * O(length of the stretch).
 *
 * @param ends two different places in any order, within the columns; taken at whole metres
 * @returns null where the stretch has no length
 */
export function stretchFigures(columns: StretchColumns, ends: readonly [number, number]): StretchFigures | null {
	const fromM = Math.round(Math.min(...ends));
	const toM = Math.round(Math.max(...ends));
	if (!(toM > fromM)) return null;
	const first = fromM - columns.fromM;
	const last = toM - columns.fromM;
	const deltaS = (columns.apartS[last] ?? NaN) - (columns.apartS[first] ?? NaN);
	const side = (of: Record<RowKey, Column>, key: RowKey): StretchSide | null => {
		const column = of[key];
		return column === null ? null : sideOf(column, first, last, key === 'speed');
	};
	return {
		fromM,
		toM,
		deltaS: Number.isFinite(deltaS) ? deltaS : null,
		rows: KEYS.map((key) => ({ key, driver: side(columns.driver, key), reference: side(columns.reference, key) }))
	};
}

function sideOf(values: ArrayLike<number>, first: number, last: number, isSpeed: boolean): StretchSide | null {
	let lowest = Infinity;
	let highest = -Infinity;
	let area = 0;
	let metres = 0;
	let hasGap = false;
	for (let i = first; i <= last; i++) {
		const value = values[i] ?? NaN;
		if (!Number.isFinite(value)) {
			hasGap = true;
			continue;
		}
		lowest = Math.min(lowest, value);
		highest = Math.max(highest, value);
		const next = values[i + 1] ?? NaN;
		if (i === last || !Number.isFinite(next)) continue;
		area += isSpeed ? (1 / value + 1 / next) / 2 : (value + next) / 2;
		metres += 1;
	}
	if (lowest > highest) return null;
	const mean = metres === 0 ? (lowest + highest) / 2 : isSpeed ? metres / area : area / metres;
	return { mean, lowest, highest, hasGap };
}
