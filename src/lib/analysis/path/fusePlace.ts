import { KMH_PER_MPS } from '../../units.ts';
import type { Channels } from '../model.ts';
import { smoothNoisy } from '../stats/smoothNoisy.ts';
import type { Positions } from './freshPositions.ts';
import type { PathGeometry } from './pathGeometry.ts';
import type { Tracked } from './trackOnPath.ts';

/** Place and offset at every sample of a run. */
export interface DensePlace {
	/** unwrapped, non-decreasing; NaN before the first and after the last place that is known */
	placeM: Float64Array;
	/** left of the path positive; NaN where it is not known */
	offsetM: Float64Array;
}

/** Up to this noise a position's own place is used as it is; above, it is held against the speed. */
const EXACT_NOISE_M = 0.02;
/** Wavelengths, s, of which the noise chooses how slowly place and driven way may drift apart. */
const DRIFT_WAVELENGTHS_S = [1.5, 3, 6, 12];
/** The same for the car's distance from the path, which a driver changes more quickly. */
const OFFSET_WAVELENGTHS_S = [0.7, 1.5, 3];
/** Beyond the first and the last known place the driven way goes on for this long. */
const CARRY_ON_S = 2;
/** A car's way is longer or shorter than the path's by no more than this, on lines up to 20 m off a tight bend. */
const LEAST_RATIO = 0.6;
const LARGEST_RATIO = 1.7;

/**
 * Place at every sample, from the places of the positions and the driven way between them.
 *
 * The way along the path is the driven way times 1/(1 − κ·n) for a car n metres left of a path of curvature κ. What position and
 * way disagree by changes slowly (scale of the speed, slip), while noise does not: with noisy positions the disagreement is smoothed
 * by as much as its own cross-validation asks for. A spin or a roll back keeps the furthest place.
 *
 * @param tracked may be written into and returned: an hour's columns are not copied
 */
export function fusePlace(
	positions: Positions,
	channels: Channels,
	{ placeM: rawM, offsetM: rawOffsetM }: Tracked,
	path: PathGeometry
): DensePlace {
	const { sample, noiseM } = positions;
	const { timeS } = channels;
	const n = timeS.length;
	let placeAt = rawM;
	let offsets = rawOffsetM;
	let wayM: Float64Array | null = null;
	if (noiseM > EXACT_NOISE_M) {
		const sampleTimeS = new Float64Array(sample.length);
		for (let j = 0; j < sample.length; j++) sampleTimeS[j] = timeS[sample[j]];
		offsets = smoothNoisy(sampleTimeS, rawOffsetM, OFFSET_WAVELENGTHS_S);
		wayM = wayOnPath(channels, positions, rawM, offsets, path);
		const apart = new Float64Array(sample.length);
		for (let j = 0; j < sample.length; j++) apart[j] = rawM[j] - wayM[sample[j]];
		placeAt = smoothNoisy(sampleTimeS, apart, DRIFT_WAVELENGTHS_S);
		for (let j = 0; j < sample.length; j++) placeAt[j] += wayM[sample[j]];
	}
	const everySample = sample.length === n;
	const placeM = everySample ? placeAt : new Float64Array(n).fill(NaN);
	const offsetM = everySample ? offsets : new Float64Array(n).fill(NaN);
	let known = 0;
	for (let j = 0; j < sample.length; j++) {
		if (!Number.isNaN(rawM[j])) {
			known++;
			placeM[sample[j]] = placeAt[j];
			offsetM[sample[j]] = offsets[j];
		} else if (everySample) placeM[j] = offsetM[j] = NaN;
	}
	if (known === 0) return { placeM, offsetM };
	if (known < n) bridge(placeM, offsetM, wayM ?? wayOnPath(channels, positions, rawM, offsets, path), timeS);
	let furthest = -Infinity;
	for (let i = 0; i < n; i++) {
		if (Number.isNaN(placeM[i])) continue;
		if (placeM[i] < furthest) placeM[i] = furthest;
		furthest = placeM[i];
	}
	return { placeM, offsetM };
}

/** Way along the path at every sample, scaled so that it agrees with the positions over the whole run. */
function wayOnPath(
	channels: Channels,
	{ sample }: Positions,
	rawM: Float64Array,
	offsets: Float64Array,
	path: PathGeometry
): Float64Array {
	const steps = plainSteps(channels);
	const { placeM: places, curvaturePerM, lengthM, closed } = path;
	const spans = places.length - 1;
	let j = 0;
	let ratio = 1;
	for (let i = 0; i < steps.length; i++) {
		while (j < sample.length - 1 && sample[j + 1] <= i) j++;
		if (sample[j] <= i && Number.isFinite(rawM[j]) && Number.isFinite(offsets[j])) {
			const place = closed ? rawM[j] - Math.floor(rawM[j] / lengthM) * lengthM : rawM[j];
			const at = Math.min(Math.max(Math.round((place / lengthM) * spans), 0), spans);
			ratio = Math.min(Math.max(1 / (1 - curvaturePerM[at] * offsets[j]), LEAST_RATIO), LARGEST_RATIO);
		}
		steps[i] *= ratio;
	}
	let along = 0;
	let driven = 0;
	for (let k = 1, at = sample[0]; k < sample.length; k++) {
		let way = 0;
		while (at < sample[k]) way += steps[++at];
		const step = rawM[k] - rawM[k - 1];
		if (!Number.isFinite(step)) continue;
		along += step;
		driven += way;
	}
	const scale = driven > 0 && along > 0 ? Math.min(Math.max(along / driven, 0.7), 1.4) : 1;
	return cumulate(steps, scale);
}

/** Way of each sample's step, by trapezoids over the speed; by the distance channel where speed is missing. */
function plainSteps({ timeS, speedKmh, distanceM }: Channels): Float64Array {
	const steps = new Float64Array(timeS.length);
	for (let i = 1; i < steps.length; i++) {
		const step = ((speedKmh[i - 1] + speedKmh[i]) / (2 * KMH_PER_MPS)) * (timeS[i] - timeS[i - 1]);
		steps[i] = step >= 0 ? step : Math.max(distanceM[i] - distanceM[i - 1], 0) || 0;
	}
	return steps;
}

/** Running sum; the steps are overwritten. */
function cumulate(steps: Float64Array, scale: number): Float64Array {
	let sum = 0;
	for (let i = 0; i < steps.length; i++) {
		sum += steps[i] * scale;
		steps[i] = sum;
	}
	return steps;
}

/** Fills places between known ones by the driven way, stretched so that both ends fit; goes on a little beyond the ends. */
function bridge(placeM: Float64Array, offsetM: Float64Array, wayM: Float64Array, timeS: Float64Array): void {
	const n = placeM.length;
	let last = -1;
	for (let i = 0; i < n; i++) {
		if (Number.isNaN(placeM[i])) continue;
		if (last < 0) {
			for (let k = i - 1; k >= 0 && timeS[i] - timeS[k] <= CARRY_ON_S; k--) placeM[k] = placeM[i] - (wayM[i] - wayM[k]);
		} else if (i > last + 1) {
			const way = wayM[i] - wayM[last];
			for (let k = last + 1; k < i; k++) {
				const share = way > 0 ? (wayM[k] - wayM[last]) / way : (timeS[k] - timeS[last]) / (timeS[i] - timeS[last]);
				placeM[k] = placeM[last] + share * (placeM[i] - placeM[last]);
				if (timeS[i] - timeS[last] <= CARRY_ON_S) offsetM[k] = offsetM[last] + share * (offsetM[i] - offsetM[last]);
			}
		}
		last = i;
	}
	if (last < 0) return;
	for (let k = last + 1; k < n && timeS[k] - timeS[last] <= CARRY_ON_S; k++)
		placeM[k] = placeM[last] + wayM[k] - wayM[last];
}
