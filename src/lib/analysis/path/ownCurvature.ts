import { KMH_PER_MPS } from '../../units.ts';
import type { Channels, ReferencePath } from '../model.ts';
import { smoothScattered } from '../stats/smoothScattered.ts';
import { smoothingFor } from './closedLine.ts';
import type { Positions } from './freshPositions.ts';
import { wayAlong } from './wayAlong.ts';

/** Below this speed neither lateral acceleration nor yaw rate says how tight the line is. */
const LEAST_KMH = 30;
/** Accelerations and yaw rates are smoothed over this time, s: quicker than a driver turns the wheel. */
const MOTION_WAVELENGTH_S = 0.4;
/** Positions up to this noise are thinned to this spacing. */
const EXACT_NOISE_M = 0.02;
const LEAST_SPACING_M = 0.45;
/** Curvature is not read where positions are further apart than this, s. */
const LONGEST_STEP_S = 2;

/**
 * Curvature of the car's own line at every sample, left positive, from its positions: smoothed along the driven way by as much as
 * their noise asks for, over the whole run at once.
 *
 * @returns 1/m; NaN where the positions have a gap
 */
export function curvatureFromPositions(positions: Positions, channels: Channels): Float64Array {
	const { sample } = positions;
	const { timeS } = channels;
	const wayM = wayAlong(positions, channels);
	const nodes = Math.max(8, Math.ceil(wayM[wayM.length - 1]) + 2);
	const [x, y] = smoothLine(positions, wayM, nodes);
	const curvature = new Float64Array(nodes);
	for (let i = 1; i + 1 < nodes; i++) {
		const ax = x[i] - x[i - 1];
		const ay = y[i] - y[i - 1];
		const bx = x[i + 1] - x[i];
		const by = y[i + 1] - y[i];
		const size = Math.sqrt((ax * ax + ay * ay) * (bx * bx + by * by));
		// the turn is small; its sine over the step is the curvature of the circle through the three points, nearly
		curvature[i] = size > 1e-9 ? (ax * by - ay * bx) / (size * Math.sqrt(size)) : 0;
	}
	curvature[0] = curvature[1];
	curvature[nodes - 1] = curvature[nodes - 2];
	const out = new Float64Array(timeS.length).fill(NaN);
	for (let j = 0; j < sample.length; j++) {
		const from = sample[j];
		out[from] = between(curvature, wayM[j]);
		const to = j + 1 < sample.length ? sample[j + 1] : from;
		if (to <= from + 1 || timeS[to] - timeS[from] > LONGEST_STEP_S) continue;
		for (let i = from + 1; i < to; i++) {
			const share = (timeS[i] - timeS[from]) / (timeS[to] - timeS[from]);
			out[i] = between(curvature, wayM[j] + share * (wayM[j + 1] - wayM[j]));
		}
	}
	return out;
}

/** Coordinates at whole metres of the driven way. */
function smoothLine({ xM, yM, noiseM }: Positions, wayM: Float64Array, nodes: number): Float64Array[] {
	const options = { nodes, lambda: smoothingFor(noiseM), closed: false };
	if (noiseM > EXACT_NOISE_M) return smoothScattered(wayM, [xM, yM], null, options);
	// exact positions closer together than the detail that is kept say nothing more
	const n = wayM.length;
	const at = new Float64Array(n);
	const x = new Float64Array(n);
	const y = new Float64Array(n);
	let count = 0;
	let next = -Infinity;
	for (let j = 0; j < n; j++) {
		if (wayM[j] < next) continue;
		next = wayM[j] + LEAST_SPACING_M;
		at[count] = wayM[j];
		x[count] = xM[j];
		y[count++] = yM[j];
	}
	return smoothScattered(at.subarray(0, count), [x.subarray(0, count), y.subarray(0, count)], null, options);
}

function between(values: Float64Array, at: number): number {
	const i = Math.min(Math.floor(at), values.length - 2);
	return values[i] + (at - i) * (values[i + 1] - values[i]);
}

/**
 * Curvature of the car's own line from the channel that the path was made of, by the run's own time.
 *
 * @param bendAt curvature that the channel alone says at a sample, before smoothing
 */
export function curvatureFromMotion(channels: Channels, bendAt: (i: number) => number): Float64Array {
	const { timeS, speedKmh } = channels;
	const n = timeS.length;
	const bend = new Float64Array(n);
	const weights = new Float64Array(n);
	const stepS = MOTION_WAVELENGTH_S / 8;
	const at = new Float64Array(n);
	for (let i = 0; i < n; i++) {
		at[i] = timeS[i] / stepS;
		bend[i] = bendAt(i);
		weights[i] = speedKmh[i] > LEAST_KMH && Number.isFinite(bend[i]) ? 1 : 0;
		if (weights[i] === 0) bend[i] = 0;
	}
	const nodes = Math.max(8, Math.ceil(at[n - 1]) + 2);
	const cut = (2 * Math.PI) / 8;
	const [smooth] = smoothScattered(at, [bend], weights, { nodes, lambda: n / nodes / Math.pow(cut, 6), closed: false });
	const out = new Float64Array(n);
	for (let i = 0; i < n; i++) out[i] = weights[i] > 0 ? between(smooth, at[i]) : NaN;
	return out;
}

/**
 * Reads curvature from the channel that stands for it: a_lat/v², ω/v, or steering scaled so that a lap closes.
 *
 * @param steeringScale curvature per degree at the wheel, 1/(m·°)
 * @returns null where the run has no such channel
 */
export function bendReader(
	channels: Channels,
	origin: ReferencePath['origin'],
	steeringScale: number
): ((i: number) => number) | null {
	const { accLatMps2, yawRateRadps, steeringDeg, speedKmh } = channels;
	if (origin === 'latAcc' && accLatMps2) {
		return (i) => accLatMps2[i] / (speedKmh[i] / KMH_PER_MPS) ** 2;
	}
	if (origin === 'yawRate' && yawRateRadps) return (i) => yawRateRadps[i] / (speedKmh[i] / KMH_PER_MPS);
	if (origin === 'steering' && steeringDeg) return (i) => steeringDeg[i] * steeringScale;
	return null;
}

/**
 * Curvature per degree of steering that suits the path best, by least squares over the placed samples.
 *
 * @returns NaN without steering or places
 */
export function steeringScaleFor({ steeringDeg }: Channels, placeM: Float64Array, path: ReferencePath): number {
	if (!steeringDeg) return NaN;
	let top = 0;
	let bottom = 0;
	for (let i = 0; i < placeM.length; i++) {
		const s = placeM[i] - Math.floor(placeM[i] / path.lengthM) * path.lengthM;
		const product = path.curvaturePerM[Math.floor(s)] * steeringDeg[i];
		if (!Number.isFinite(product)) continue;
		top += product;
		bottom += steeringDeg[i] * steeringDeg[i];
	}
	return top / bottom;
}
