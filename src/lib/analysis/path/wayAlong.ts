import type { Channels } from '../model.ts';
import { sampleBefore, wayShare } from '../trace/placeTime.ts';
import type { Positions } from './freshPositions.ts';

/** Up to this noise the chords between positions measure the way better than the speed does. */
const CHORD_NOISE_M = 0.05;
/** A car that stands does not move, whatever its receiver says. */
const STANDING_KMH = 3.6;

/**
 * Way driven up to each position, m: by the chords between them, or by the distance channel where noise would lengthen them.
 */
export function wayAlong({ sample, xM, yM, noiseM }: Positions, { distanceM, speedKmh }: Channels): Float64Array {
	const way = new Float64Array(sample.length);
	const byChords = noiseM <= CHORD_NOISE_M;
	let sum = 0;
	for (let j = 1; j < way.length; j++) {
		let step = distanceM[sample[j]] - distanceM[sample[j - 1]];
		if (byChords && !(speedKmh[sample[j]] < STANDING_KMH)) {
			const dx = xM[j] - xM[j - 1];
			const dy = yM[j] - yM[j - 1];
			step = Math.sqrt(dx * dx + dy * dy);
		}
		if (step > 0) sum += step;
		way[j] = sum;
	}
	return way;
}

/** Way driven at a time; the speed changes evenly between positions. Goes on beyond the first and the last of them. */
export function wayAt({ sample }: Positions, { timeS, speedKmh }: Channels, wayM: Float64Array, atS: number): number {
	const i = sampleBefore(timeS, atS);
	let low = 0;
	let high = sample.length - 1;
	while (low < high) {
		const middle = (low + high + 1) >> 1;
		if (sample[middle] <= i) low = middle;
		else high = middle - 1;
	}
	const j = Math.min(low, sample.length - 2);
	const from = sample[j];
	const to = sample[j + 1];
	const share = (atS - timeS[from]) / (timeS[to] - timeS[from]);
	return wayM[j] + (wayM[j + 1] - wayM[j]) * wayShare(share, speedKmh[from], speedKmh[to]);
}
