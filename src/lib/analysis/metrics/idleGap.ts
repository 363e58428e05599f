import type { FullThrottleModel } from '../car/fullThrottle.ts';
import { fullThrottleAcceleration } from '../car/fullThrottle.ts';
import type { PlacedRun } from '../model.ts';
import { sampleBefore } from '../trace/placeTime.ts';
import { KMH_PER_MPS } from '../../units.ts';
import { slope } from './levelStretches.ts';
import type { Span } from './coasting.ts';

/** Domain: the car turns no more than this. */
const TURNING_MPS2 = 2;
/** Domain: it accelerates at less than this share of what it can. */
const HARD_SHARE = 0.5;
/** Acceleration is read over this much on either side: shorter reads noise, longer smears the end of the gap. */
const HALF_WINDOW_S = 0.1;

/**
 * Idle time between two linked corners: the car neither turns nor brakes nor accelerates hard.
 *
 * @param placed the run, with the curvature of its own line
 * @param span   apex of the first corner to apex of the next
 * @param brakings when the brake was on
 * @param model  the car at full throttle; null leaves the acceleration out, and only coasting and steady speed count
 * @returns s; null where the line's curvature is not known
 */
export function idleGap(
	placed: PlacedRun,
	span: Span,
	brakings: Span[],
	model: FullThrottleModel | null
): number | null {
	const { curvaturePerM, channels } = placed;
	const { timeS, speedKmh, sampleRateHz } = channels;
	if (!curvaturePerM) return null;
	const first = Math.max(0, sampleBefore(timeS, span.startS));
	const last = Math.min(timeS.length - 1, sampleBefore(timeS, span.endS) + 1);
	const half = Math.max(1, Math.round(HALF_WINDOW_S * sampleRateHz));
	const lateral = (i: number) => Math.abs(curvaturePerM[i]) * (speedKmh[i] / KMH_PER_MPS) * (speedKmh[i] / KMH_PER_MPS);
	const isHard = (i: number) => {
		const acceleration =
			slope(timeS, speedKmh, Math.max(0, i - half), Math.min(timeS.length - 1, i + half)) / KMH_PER_MPS;
		return acceleration >= HARD_SHARE * (model ? fullThrottleAcceleration(model, speedKmh[i]) : Infinity);
	};
	const near = brakings.filter((one) => one.endS > span.startS && one.startS < span.endS);
	let totalS = 0;
	for (let i = first; i < last; i++) {
		const lengthS = Math.min(timeS[i + 1], span.endS) - Math.max(timeS[i], span.startS);
		if (!(lengthS > 0)) continue;
		const a = lateral(i);
		const b = lateral(i + 1);
		// share of the step below the limit, the lateral acceleration running straight between samples
		const low = Math.min(a, b);
		const share = Math.max(a, b) < TURNING_MPS2 ? 1 : low < TURNING_MPS2 ? (TURNING_MPS2 - low) / Math.abs(b - a) : 0;
		if (!(share > 0) || isHard(i) || isHard(i + 1)) continue;
		const braked = near.reduce(
			(sum, one) => sum + Math.max(0, Math.min(timeS[i + 1], one.endS) - Math.max(timeS[i], one.startS)),
			0
		);
		totalS += share * Math.max(0, lengthS - braked);
	}
	return totalS;
}
