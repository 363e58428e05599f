import type { Signal } from './crossing.ts';

/** A release is looked at in this many pieces of equal length: enough to see its shape, few enough to be free of noise. */
const PIECES = 6;
/** A piece may be this much steeper than the one before and still count as no steeper. */
const TOLERANCE_SHARE = 0.15;
/** Below a light hold's band, or this share of a light braking's peak, the foot is coming off: how fast says nothing of the shape. */
const TAIL_PCT = 12;
const TAIL_SHARE = 0.4;

/**
 * Is a release progressive: does its slope only fall, so that pressure bleeds away ever more gently? A straight release counts.
 *
 * @param brake  % of full pedal
 * @param startS, endS  the release
 * @param peakPct  level from which it comes
 * @returns null where it is too short to have a shape
 */
export function isProgressive(brake: Signal, startS: number, endS: number, peakPct: number): boolean | null {
	const { timeS, values, noise } = brake;
	const tail = Math.min(TAIL_PCT, TAIL_SHARE * peakPct);
	let first = 0;
	let high = values.length;
	while (first < high) {
		const middle = (first + high) >> 1;
		if (timeS[middle] < startS) first = middle + 1;
		else high = middle;
	}
	let last = first;
	while (last + 1 < values.length && timeS[last + 1] <= endS && values[last + 1] >= tail) last++;
	if (last - first < PIECES) return null;
	const lengthS = timeS[last] - timeS[first];
	let before = Infinity;
	for (let piece = 0; piece < PIECES; piece++) {
		const a = first + Math.round((piece * (last - first)) / PIECES);
		const b = first + Math.round(((piece + 1) * (last - first)) / PIECES);
		const slope = (values[a] - values[b]) / (timeS[b] - timeS[a]);
		const blur = (3 * noise * Math.SQRT2) / (timeS[b] - timeS[a]) + 0.05 * (peakPct / lengthS);
		if (slope > before * (1 + TOLERANCE_SHARE) + blur || slope < -blur) return false;
		before = slope;
	}
	return true;
}
