import type { Channels } from '../model.ts';
import type { CrossingTimes } from './crossingsByRestart.ts';
import { timeShare } from '../trace/placeTime.ts';

/** Crossings are believed to be evenly spaced when no lap's length is off by more than this share of a sample step. */
const LARGEST_MISFIT = 0.5;

/**
 * Crossing times within the marked sample steps when every lap has the same length along the distance channel (a distance along
 * the centre line, or a driver who repeats his line to the metre): the crossings then lie on a straight line over the lap count.
 *
 * @param marks first samples behind the crossings
 * @returns null where lap lengths differ by more than sampling explains, or with fewer than three crossings
 */
export function crossingsByEvenLaps(channels: Channels, marks: number[]): CrossingTimes | null {
	const { distanceM, timeS, speedKmh } = channels;
	const n = marks.length;
	if (n < 3 || marks[0] === 0) return null;
	// least squares through the middles of the steps
	const middle = marks.map((i) => (distanceM[i - 1] + distanceM[i]) / 2);
	const centre = (n - 1) / 2;
	let sxy = 0;
	let sxx = 0;
	let sy = 0;
	for (let k = 0; k < n; k++) {
		sxy += (k - centre) * middle[k];
		sxx += (k - centre) ** 2;
		sy += middle[k];
	}
	const lengthM = sxy / sxx;
	const atS = new Float64Array(n);
	let squares = 0;
	for (let k = 0; k < n; k++) {
		const i = marks[k];
		const step = distanceM[i] - distanceM[i - 1];
		const off = (sy / n + lengthM * (k - centre) - middle[k]) / step;
		if (!(Math.abs(off) <= LARGEST_MISFIT + 0.1)) return null;
		squares += off * off;
		const share = Math.min(Math.max(off + 0.5, 0), 1);
		atS[k] = timeS[i - 1] + (timeS[i] - timeS[i - 1]) * timeShare(share, speedKmh[i - 1], speedKmh[i]);
	}
	const step = (timeS[marks[n - 1]] - timeS[marks[n - 1] - 1]) * Math.sqrt(squares / n / n) * 2;
	return { atS, plusMinusS: step };
}
