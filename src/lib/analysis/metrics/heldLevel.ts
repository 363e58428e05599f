import type { Signal } from './crossing.ts';

const ROUNDS = 24;

/**
 * The highest level that a signal holds without a break for a time, between two samples: a peak without the single high sample.
 *
 * A sample stands for half an interval on either side of it, and between samples the course is straight; so a plateau of 0.05 s is
 * found whole at 60 Hz, and at 20 Hz and below one sample is enough. Found by halving. O(n) per round.
 *
 * @param signal the trace
 * @param from, to  first and last sample, to ≥ from
 * @param holdS  how long
 * @param sampleS  sampling interval
 * @returns a level between the smallest and the largest value of the stretch
 */
export function heldLevel({ timeS, values }: Signal, from: number, to: number, holdS: number, sampleS: number): number {
	const widthS = Math.max(0, holdS - sampleS) - 1e-9;
	let high = -Infinity;
	let low = Infinity;
	for (let i = from; i <= to; i++) {
		if (values[i] > high) high = values[i];
		if (values[i] < low) low = values[i];
	}
	if (widthS <= 0) return high;
	if (longestAbove(timeS, values, from, to, high) >= widthS) return high;
	for (let round = 0; round < ROUNDS; round++) {
		const middle = (low + high) / 2;
		if (longestAbove(timeS, values, from, to, middle) >= widthS) low = middle;
		else high = middle;
	}
	return low;
}

function longestAbove(timeS: Float64Array, values: Float64Array, from: number, to: number, level: number): number {
	let longest = -Infinity;
	let since = NaN;
	for (let i = from; i <= to; i++) {
		if (values[i] >= level) {
			if (Number.isNaN(since)) since = i > from ? between(timeS, values, i - 1, level) : timeS[i];
			if (i === to) longest = Math.max(longest, timeS[i] - since);
		} else if (!Number.isNaN(since)) {
			longest = Math.max(longest, between(timeS, values, i - 1, level) - since);
			since = NaN;
		}
	}
	return longest;
}

function between(timeS: Float64Array, values: Float64Array, i: number, level: number): number {
	const share = (level - values[i]) / (values[i + 1] - values[i]);
	return timeS[i] + (share >= 0 && share <= 1 ? share : values[i + 1] >= level ? 1 : 0) * (timeS[i + 1] - timeS[i]);
}
