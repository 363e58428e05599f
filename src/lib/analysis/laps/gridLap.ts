import type { Lap, LapGrid, PlacedRun } from '../model.ts';
import { placedEnds, timeAtPlace, timeShare } from '../trace/placeTime.ts';

/**
 * Puts one lap on the path's 1 m grid, with a margin before and after the line taken from the laps beside it.
 *
 * Between two samples the speed changes evenly, which says at what share of the step's time a place is passed; every channel is
 * interpolated straight over that share, the gear is that of the sample before. Entry i is at s = i − marginM. O(grid + samples).
 *
 * @param lap     a lap with a turn; one without has nothing on the grid (all NaN)
 * @param marginM whole metres before and after the line
 * @returns columns of floor(lengthM) + 2 · marginM + 1 entries, NaN where the run has no sample
 * @throws {RangeError} if marginM is not a whole number ≥ 0
 */
export function gridLap(placed: PlacedRun, lap: Lap, marginM = 250): LapGrid {
	if (!(Number.isInteger(marginM) && marginM >= 0))
		throw new RangeError(`gridLap requires whole metres of margin, got ${marginM}`);
	const { channels, placeM, offsetM, curvaturePerM, path } = placed;
	const { timeS, speedKmh } = channels;
	const { lengthM } = path;
	const size = Math.floor(lengthM) + 2 * marginM + 1;
	const startM = (lap.turn ?? NaN) * lengthM;
	const startS = timeAtPlace(placed, startM);
	const before = new Int32Array(size).fill(-1);
	const share = new Float64Array(size);
	const time = new Float64Array(size).fill(NaN);
	const { first, last } = placedEnds(placeM);
	let i = sampleAtPlace(placeM, startM - marginM, first, last);
	for (let k = 0; k < size; k++) {
		const place = startM - marginM + k;
		if (!(place >= placeM[first] && place <= placeM[last])) continue;
		while (i + 1 <= last && placeM[i + 1] < place) i++;
		const next = Math.min(i + 1, last);
		const step = placeM[next] - placeM[i];
		const way = step > 0 ? Math.max((place - placeM[i]) / step, 0) : 0;
		share[k] = timeShare(way, speedKmh[i], speedKmh[next]);
		before[k] = i;
		time[k] = timeS[i] + share[k] * (timeS[next] - timeS[i]) - startS;
	}
	const column = (values: Float64Array | null) => values && interpolated(values, before, share, last);
	return {
		lapNumber: lap.number,
		lengthM,
		marginM,
		lapTimeS: timeAtPlace(placed, startM + lengthM) - startS,
		timeS: time,
		speedKmh: interpolated(speedKmh, before, share, last),
		brakePct: column(channels.brakePct),
		throttlePct: column(channels.throttlePct),
		steeringDeg: column(channels.steeringDeg),
		offsetM: column(offsetM),
		curvaturePerM: column(curvaturePerM),
		accLongMps2: column(channels.accLongMps2),
		gear: channels.gear && held(channels.gear, before),
		engineSpeedRpm: column(channels.engineSpeedRpm)
	};
}

/** Last sample before a place, or the first placed one. */
function sampleAtPlace(placeM: Float64Array, place: number, first: number, last: number): number {
	let low = first;
	let high = last;
	while (low < high) {
		const middle = (low + high + 1) >> 1;
		if (placeM[middle] < place) low = middle;
		else high = middle - 1;
	}
	return low;
}

function interpolated(values: Float64Array, before: Int32Array, share: Float64Array, last: number): Float64Array {
	const out = new Float64Array(before.length);
	for (let k = 0; k < out.length; k++) {
		const i = before[k];
		if (i < 0) out[k] = NaN;
		else {
			const from = values[i];
			// a share of 0 must not pick up a gap in the next sample
			out[k] = share[k] === 0 ? from : from + share[k] * (values[Math.min(i + 1, last)] - from);
		}
	}
	return out;
}

function held(values: Float64Array, before: Int32Array): Float64Array {
	const out = new Float64Array(before.length);
	for (let k = 0; k < out.length; k++) out[k] = before[k] < 0 ? NaN : values[before[k]];
	return out;
}
