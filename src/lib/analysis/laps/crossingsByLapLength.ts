import { KMH_PER_MPS } from '../../units.ts';
import type { Channels } from '../model.ts';
import type { CrossingTimes } from './crossingsByRestart.ts';

const STEP_M = 5;
/** Circuits are between these lengths. */
const SHORTEST_LAP_M = 300;
const LONGEST_LAP_M = 30000;
/** Correlation of the speed trace with itself one lap on; a lap repeats much better than two different parts of a circuit. */
const LEAST_CORRELATION = 0.85;
/** A multiple of the lap correlates as well as the lap: the first lag that comes this near to the best is it. */
const NEAR_BEST = 0.9;
const MOVING_KMH = 10;
/** Each lap's length may differ from the last by this much. */
const SHIFT_M = 50;

/**
 * Cuts laps of a run that has nothing but speed: the lap is the way after which the speed trace repeats itself, and each lap is
 * laid on the one before by the shift at which their speeds agree best.
 *
 * @returns null where the speed does not repeat itself
 */
export function crossingsByLapLength(channels: Channels): CrossingTimes | null {
	const { distanceM, timeS, speedKmh } = channels;
	const first = speedKmh.findIndex((speed) => speed > MOVING_KMH);
	const last = timeS.length - 1;
	if (first < 0 || !(distanceM[last] - distanceM[first] > 2 * SHORTEST_LAP_M)) return null;
	const n = Math.floor((distanceM[last] - distanceM[first]) / STEP_M);
	const speed = new Float64Array(n);
	const time = new Float64Array(n);
	for (let k = 0, i = first; k < n; k++) {
		const place = distanceM[first] + k * STEP_M;
		while (i < last - 1 && distanceM[i + 1] < place) i++;
		const share = (place - distanceM[i]) / (distanceM[i + 1] - distanceM[i]) || 0;
		time[k] = timeS[i] + share * (timeS[i + 1] - timeS[i]);
		speed[k] = (speedKmh[i] + share * (speedKmh[i + 1] - speedKmh[i])) / KMH_PER_MPS || 0;
	}
	const longest = Math.min(Math.floor(n / 2), Math.floor(LONGEST_LAP_M / STEP_M));
	const shortest = Math.floor(SHORTEST_LAP_M / STEP_M);
	const likeness = new Float64Array(longest + 1);
	let best = 0;
	for (let lag = shortest; lag <= longest; lag++) {
		likeness[lag] = correlation(speed, 0, lag, n - lag);
		if (likeness[lag] > best) best = likeness[lag];
	}
	if (best < LEAST_CORRELATION) return null;
	let lap = shortest;
	while (lap <= longest && likeness[lap] < NEAR_BEST * best) lap++;
	while (lap < longest && likeness[lap + 1] > likeness[lap]) lap++;
	const atS = [time[0]];
	const reach = Math.round(SHIFT_M / STEP_M);
	for (let at = 0; ;) {
		const length = Math.min(lap, n - at - lap - reach);
		if (length < lap / 4) break;
		let next = at + lap;
		let agreement = -Infinity;
		for (let shift = -reach; shift <= reach; shift++) {
			const value = correlation(speed, at, at + lap + shift, length);
			if (value > agreement) {
				agreement = value;
				next = at + lap + shift;
			}
		}
		at = next;
		atS.push(time[at]);
	}
	if (atS.length < 2) return null;
	return { atS: Float64Array.from(atS), plusMinusS: STEP_M / 2 / Math.max(speed[0], 3) };
}

/** Pearson's correlation of two stretches of equal length. */
function correlation(values: Float64Array, a: number, b: number, length: number): number {
	let sa = 0;
	let sb = 0;
	let saa = 0;
	let sbb = 0;
	let sab = 0;
	for (let i = 0; i < length; i++) {
		const x = values[a + i];
		const y = values[b + i];
		sa += x;
		sb += y;
		saa += x * x;
		sbb += y * y;
		sab += x * y;
	}
	const spread = (saa - (sa * sa) / length) * (sbb - (sb * sb) / length);
	return spread > 0 ? (sab - (sa * sb) / length) / Math.sqrt(spread) : 0;
}
