import { robustSpread } from '../stats/robustSpread.ts';
import { median } from '../stats/quantile.ts';
import type { Channels } from '../model.ts';
import { speedMps } from './crossLine.ts';
import { timeBack, wayBetween } from './wayBetween.ts';

/** Crossing times, and how sure they are. */
export interface CrossingTimes {
	atS: Float64Array;
	plusMinusS: number;
}

/** Way and time behind the line over which its lap distance is fitted: rounding and noise average out, the track does not bend yet. */
const FIT_REACH_M = 12;
const FIT_REACH_S = 0.12;
/** With a lap distance noisier than this more of it is fitted. */
const FINE_NOISE_M = 0.02;
const NOISY_REACH_M = 40;
const NOISY_REACH_S = 1;
/** A running lap time may restart up to this many sample steps late. */
const LATE_STEPS = 1.5;

/**
 * Crossing times from a lap distance that restarts at the line: its first value behind the line is the way driven since.
 *
 * @param restarts first samples behind the line
 * @returns null where the distance restarts at a sample instead of at the line, so that nothing finer is known
 */
export function crossingsByLapDistance(channels: Channels, restarts: number[]): CrossingTimes | null {
	const { lapDistanceM, timeS } = channels;
	if (!lapDistanceM || restarts.length === 0) return null;
	const snapped = restarts.filter((i) => Math.abs(lapDistanceM[i]) < 1e-9 && speedMps(channels, i) > 1).length;
	if (restarts.length > 1 && 2 * snapped > restarts.length) return null;
	const noiseM = distanceNoise(channels, restarts);
	const atS = Float64Array.from(restarts, (i) => {
		const wayM = fittedWay(channels, i, noiseM > FINE_NOISE_M) ?? lapDistanceM[i] / scaleAround(channels, i);
		return timeS[i] - timeBack(channels, i, wayM);
	});
	const speed = median(restarts.map((i) => speedMps(channels, i)));
	return { atS, plusMinusS: speed > 1 ? noiseM / speed : Infinity };
}

/** Metres of lap distance per metre driven, around a restart: a centre line is longer or shorter than the driven one. */
function scaleAround(channels: Channels, i: number): number {
	const lapDistance = channels.lapDistanceM;
	if (!lapDistance) return 1;
	const low = Math.max(0, i - 4);
	const high = Math.min(lapDistance.length - 1, i + 3);
	const counted = lapDistance[i - 1] - lapDistance[low] + lapDistance[high] - lapDistance[i];
	const driven = wayBetween(channels, low, i - 1) + wayBetween(channels, i, high);
	const scale = counted / driven;
	return scale > 0.8 && scale < 1.25 ? scale : 1;
}

/** Way behind the line at a restart, from a straight line through the next values over the driven way; null with fewer than four. */
function fittedWay(channels: Channels, i: number, noisy: boolean): number | null {
	const reachM = noisy ? NOISY_REACH_M : FIT_REACH_M;
	const reachS = noisy ? NOISY_REACH_S : FIT_REACH_S;
	const { lapDistanceM, timeS } = channels;
	if (!lapDistanceM) return null;
	let n = 0;
	let sx = 0;
	let sy = 0;
	let sxx = 0;
	let sxy = 0;
	let way = 0;
	for (let j = i; j < timeS.length; j++) {
		if (j > i) way += wayBetween(channels, j - 1, j);
		if (way > reachM || timeS[j] - timeS[i] > reachS || !(lapDistanceM[j] >= 0)) break;
		n++;
		sx += way;
		sy += lapDistanceM[j];
		sxx += way * way;
		sxy += way * lapDistanceM[j];
	}
	const spread = n * sxx - sx * sx;
	if (n < 4 || !(spread > 0)) return null;
	const slope = (n * sxy - sx * sy) / spread;
	return slope > 0.5 ? (sy - slope * sx) / n / slope : null;
}

/** Noise of one value of the lap distance, rounding included, from how unevenly it follows the driven way. */
function distanceNoise(channels: Channels, restarts: number[]): number {
	const { lapDistanceM, timeS } = channels;
	if (!lapDistanceM) return Infinity;
	const uneven: number[] = [];
	for (const restart of restarts) {
		let before = NaN;
		for (let i = restart + 1; i < Math.min(restart + 40, timeS.length); i++) {
			const excess = lapDistanceM[i] - lapDistanceM[i - 1] - wayBetween(channels, i - 1, i);
			uneven.push(excess - before);
			before = excess;
		}
	}
	return robustSpread(uneven) / Math.sqrt(6) || 0;
}

/**
 * Crossing times from a running lap time that restarts at the line: its first value behind the line is the time since.
 *
 * @returns null where a value does not lie within the sample step at which it restarts
 */
export function crossingsByLapTime(channels: Channels, restarts: number[]): CrossingTimes | null {
	const { lapTimeColumnS, timeS } = channels;
	if (!lapTimeColumnS || restarts.length === 0) return null;
	const atS = new Float64Array(restarts.length);
	let fine = 0;
	for (let k = 0; k < restarts.length; k++) {
		const i = restarts[k];
		const since = lapTimeColumnS[i];
		const step = i > 0 ? timeS[i] - timeS[i - 1] : 0;
		if (!(since >= 0 && since <= LATE_STEPS * step)) return null;
		if (since > 0) fine++;
		atS[k] = timeS[i] - since;
	}
	// a clock that always restarts at 0 restarts with the sample
	if (2 * fine < restarts.length) return null;
	return { atS, plusMinusS: resolution(lapTimeColumnS, restarts) / 2 };
}

/** Finest decimal step in the values behind the restarts: 1 ms, 10 ms … */
function resolution(values: Float64Array, at: number[]): number {
	for (const step of [1, 0.1, 0.01, 0.001]) {
		if (at.every((i) => Math.abs(values[i] / step - Math.round(values[i] / step)) < 1e-6)) return step;
	}
	return 0.0005;
}
