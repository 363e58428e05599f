import { KMH_PER_MPS } from '../../units.ts';
import { gridLap } from '../laps/gridLap.ts';
import type { Lap, PlacedRun } from '../model.ts';
import { quantile } from '../stats/quantile.ts';

/** What the corners are judged by: one lap's motion and pedals at whole metres, unrolled over three turns of a closed path. */
export interface ReferenceTrace {
	/** place of entry 0, m: −L on a closed path, 0 on an open one */
	fromM: number;
	/** number of entries; entry i is at fromM + i */
	size: number;
	lengthM: number;
	closed: boolean;
	/** s, growing throughout */
	timeS: Float64Array;
	speedMps: Float64Array;
	/** path's curvature, left positive, smoothed over what a car drives in about 0.25 s to each side */
	curvaturePerM: Float64Array;
	/** in % of full pedal; null where the run has none */
	brakePct: Float64Array | null;
	throttlePct: Float64Array | null;
	/** lateral acceleration that the car uses where it uses most, m/s² */
	envelopeMps2: number;
}

/**
 * Curvature is averaged twice over the way driven in this time to each side: quicker than any transition, slower than corrections at
 * the wheel. With 0.08 s noisy positions split wide corners, with 0.2 s ends of clean ones move by a metre.
 */
const SMOOTHING_S = 0.14;
const LEAST_SMOOTHING_M = 1.5;
const MOST_SMOOTHING_M = 14;
/** Share of the way above which the lateral acceleration counts as the car's envelope: single spikes do not. */
const ENVELOPE_SHARE = 0.98;

/**
 * The lap that corners are judged by: the fastest clean one, else the fastest timed one, else what there is.
 */
export function referenceLap({ laps }: PlacedRun): Lap | null {
	const onPath = laps.filter((lap) => lap.turn !== null);
	const timed = onPath.filter((lap) => lap.kind === 'timed');
	const clean = timed.filter((lap) => lap.clean);
	const pool = [clean, timed, onPath].find((list) => list.length > 0) ?? [];
	return pool.reduce<Lap | null>(
		(best, lap) => (best === null || lap.endS - lap.startS < best.endS - best.startS ? lap : best),
		null
	);
}

/**
 * Reads the reference lap and the path into one trace. A closed path is unrolled over three turns, so that a corner may lie across
 * the line and a search never meets an end.
 *
 * @returns null where the run has no lap on the path
 */
export function referenceTrace(placed: PlacedRun): ReferenceTrace | null {
	const lap = referenceLap(placed);
	if (!lap) return null;
	const { path } = placed;
	const { lengthM, closed } = path;
	const grid = gridLap(placed, lap, 0);
	const count = grid.timeS.length;
	const fromM = closed ? -Math.floor(lengthM) : 0;
	const size = closed ? 3 * Math.floor(lengthM) + 1 : count;
	const lapS = lap.endS - lap.startS;
	const times = filled(grid.timeS);
	const speeds = filled(grid.speedKmh);
	const timeS = new Float64Array(size);
	const speedMps = new Float64Array(size);
	const bends = new Float64Array(size);
	const brakePct = grid.brakePct && new Float64Array(size);
	const throttlePct = grid.throttlePct && new Float64Array(size);
	for (let i = 0; i < size; i++) {
		const place = fromM + i;
		const turn = closed ? Math.floor(place / lengthM) : 0;
		const s = place - turn * lengthM;
		const at = Math.min(Math.floor(s), count - 1);
		const next = at + 1 < count ? at + 1 : closed ? 0 : at;
		const span = next === 0 ? Math.max(lengthM - at, 1e-6) : 1;
		const share = Math.min((s - at) / span, 1);
		const between = (values: Float64Array) => values[at] + share * (values[next] - values[at]);
		const nextTime = next === 0 ? lapS : times[next];
		timeS[i] = turn * lapS + times[at] + share * (nextTime - times[at]);
		speedMps[i] = between(speeds) / KMH_PER_MPS;
		bends[i] = between(path.curvaturePerM);
		if (brakePct && grid.brakePct) brakePct[i] = grid.brakePct[at];
		if (throttlePct && grid.throttlePct) throttlePct[i] = grid.throttlePct[at];
	}
	const curvaturePerM = smoothed(smoothed(bends, speedMps), speedMps);
	const sideways = curvaturePerM.map((bend, i) => Math.abs(bend) * speedMps[i] ** 2);
	const envelopeMps2 = quantile(closed ? sideways.subarray(count, 2 * count) : sideways, ENVELOPE_SHARE);
	return { fromM, size, lengthM, closed, timeS, speedMps, curvaturePerM, brakePct, throttlePct, envelopeMps2 };
}

/** Missing values take the last known one, leading ones the first. */
function filled(values: Float64Array): Float64Array {
	const out = values.slice();
	let last = out.find((value) => !Number.isNaN(value)) ?? 0;
	for (let i = 0; i < out.length; i++) {
		if (Number.isNaN(out[i])) out[i] = last;
		else last = out[i];
	}
	return out;
}

/** Mean over a way to each side that grows with speed. */
function smoothed(values: Float64Array, speedMps: Float64Array): Float64Array {
	const n = values.length;
	// sum[i] is the integral up to the middle between i − 1 and i
	const sum = new Float64Array(n + 1);
	for (let i = 0; i < n; i++) sum[i + 1] = sum[i] + values[i];
	const integral = (at: number) => {
		const u = Math.min(Math.max(at + 0.5, 0), n);
		const i = Math.min(Math.floor(u), n - 1);
		return sum[i] + (u - i) * values[i];
	};
	const out = new Float64Array(n);
	for (let i = 0; i < n; i++) {
		const reach = Math.min(Math.max(SMOOTHING_S * speedMps[i], LEAST_SMOOTHING_M), MOST_SMOOTHING_M);
		const low = Math.max(i - reach, -0.5);
		const high = Math.min(i + reach, n - 0.5);
		out[i] = (integral(high) - integral(low)) / (high - low);
	}
	return out;
}
