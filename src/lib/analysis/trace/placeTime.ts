import { KMH_PER_MPS } from '../../units.ts';
import type { PlacedRun } from '../model.ts';

/**
 * Time and place of a placed run, each as a function of the other. Between two samples the speed is taken to change evenly
 * from one sample's to the next (constant acceleration), scaled so that the step in place is met exactly; plain linear
 * interpolation would be 1–2 ms wrong under braking at 10 Hz.
 */

/** first and last sample with a place, by the column; places inside are finite by the invariant of PlacedRun */
const ends = new WeakMap<Float64Array, { first: number; last: number }>();

/**
 * First and last sample that have a place.
 *
 * @returns indices; first > last where no sample has one
 */
export function placedEnds(placeM: Float64Array): { first: number; last: number } {
	const known = ends.get(placeM);
	if (known) return known;
	let first = 0;
	while (first < placeM.length && Number.isNaN(placeM[first])) first++;
	let last = placeM.length - 1;
	while (last >= first && Number.isNaN(placeM[last])) last--;
	const found = { first, last };
	ends.set(placeM, found);
	return found;
}

/**
 * Share of a step's time after which a share of its way is done, when speed changes evenly from `v0` to `v1` (any unit).
 *
 * Way after share u of the time: w(u) = (v0·u + (v1 − v0)·u²/2) / ((v0 + v1)/2); solved for u in the form that stays exact for v0 ≈ v1.
 */
export function timeShare(wayShare: number, v0: number, v1: number): number {
	if (!(v0 >= 0 && v1 >= 0 && v0 + v1 > 0)) return wayShare;
	const way = (wayShare * (v0 + v1)) / 2;
	const root = v0 + Math.sqrt(Math.max(v0 * v0 + 2 * (v1 - v0) * way, 0));
	return root > 0 ? Math.min((2 * way) / root, 1) : wayShare;
}

/** Inverse of `timeShare`: share of a step's way that is done after a share of its time. */
export function wayShare(share: number, v0: number, v1: number): number {
	if (!(v0 >= 0 && v1 >= 0 && v0 + v1 > 0)) return share;
	return (share * (2 * v0 + (v1 - v0) * share)) / (v0 + v1);
}

/** A file that is cut at the line ends up to this many sample steps away from it; so far places go on at the last speed. */
const STEPS_BEYOND = 1.6;

/** Time of a place up to a sample step beyond the first or last placed sample, at that sample's speed; NaN further away. */
function timeBeyond({ placeM: places, channels }: PlacedRun, placeM: number, end: number, neighbour: number): number {
	const { timeS, speedKmh } = channels;
	const speed = speedKmh[end] / KMH_PER_MPS;
	const apart = (placeM - places[end]) / speed;
	const step = Math.abs(timeS[end] - timeS[neighbour]);
	return Math.abs(apart) <= STEPS_BEYOND * step ? timeS[end] + apart : NaN;
}

/**
 * Time at which the run first reaches a place. Up to a sample step beyond the run's ends the last speed is carried on, because
 * people export files that are cut at the line.
 *
 * @param placed the run on its path
 * @param placeM unwrapped place, turn · L + s
 * @returns s from the run's first sample; NaN where the run does not reach it
 */
export function timeAtPlace(placed: PlacedRun, placeM: number): number {
	const { placeM: places, channels } = placed;
	const { first, last } = placedEnds(places);
	if (!(placeM >= places[first])) return last > first ? timeBeyond(placed, placeM, first, first + 1) : NaN;
	if (!(placeM <= places[last])) return last > first ? timeBeyond(placed, placeM, last, last - 1) : NaN;
	// lower bound: the first sample at or beyond the place
	let low = first;
	let high = last;
	while (low < high) {
		const middle = (low + high) >> 1;
		if (places[middle] < placeM) low = middle + 1;
		else high = middle;
	}
	if (low === first || places[low] === placeM) return channels.timeS[low];
	const i = low - 1;
	const share = (placeM - places[i]) / (places[low] - places[i]);
	const { timeS, speedKmh } = channels;
	return timeS[i] + (timeS[low] - timeS[i]) * timeShare(share, speedKmh[i], speedKmh[low]);
}

/**
 * Index of the last sample at or before a time.
 *
 * @returns −1 before the first sample
 */
export function sampleBefore(timeS: Float64Array, atS: number): number {
	let low = 0;
	let high = timeS.length;
	while (low < high) {
		const middle = (low + high) >> 1;
		if (timeS[middle] <= atS) low = middle + 1;
		else high = middle;
	}
	return low - 1;
}

/**
 * Unwrapped place of the run at a time.
 *
 * @param placed the run on its path
 * @param timeS  s from the run's first sample
 * @returns turn · L + s in m; NaN outside the placed samples, but for a sample step beyond the run's ends
 */
export function placeAtTime(placed: PlacedRun, timeS: number): number {
	const { placeM: places, channels } = placed;
	const last = channels.timeS.length - 1;
	const i = sampleBefore(channels.timeS, timeS);
	if (i < 0 || i === last) {
		const end = Math.max(i, 0);
		const apart = timeS - channels.timeS[end];
		const step = i < 0 ? channels.timeS[1] - channels.timeS[0] : channels.timeS[last] - channels.timeS[last - 1];
		return Math.abs(apart) <= STEPS_BEYOND * step ? places[end] + (channels.speedKmh[end] / KMH_PER_MPS) * apart : NaN;
	}
	const from = channels.timeS[i];
	if (timeS === from) return places[i];
	const share = (timeS - from) / (channels.timeS[i + 1] - from);
	const { speedKmh } = channels;
	return places[i] + (places[i + 1] - places[i]) * wayShare(share, speedKmh[i], speedKmh[i + 1]);
}
