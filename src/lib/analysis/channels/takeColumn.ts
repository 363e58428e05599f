import { fillGaps } from './fillGaps.ts';
import { releaseHeld } from './releaseHeld.ts';

/** Missing values over a shorter span are bridged (s): a sensor at 2 Hz and up; a longer one is a drop-out. */
const MAX_BRIDGE_S = 0.55;

export interface TakenColumn {
	values: Float64Array;
	/** longest gap left open, s, and where it begins; −1 where there is none */
	gap: { longestS: number; at: number };
}

/**
 * A channel's own copy of a column: repeats of a slower sensor let go, short gaps bridged by lines.
 *
 * @param column NaN for missing
 */
export function takeColumn(column: Float64Array | Float32Array, timeS: Float64Array): TakenColumn {
	const values = new Float64Array(column);
	releaseHeld(values);
	return { values, gap: fillGaps(values, timeS, MAX_BRIDGE_S) };
}
