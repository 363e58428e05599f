import { KMH_PER_MPS } from '../../units.ts';
import { sampleBefore } from '../trace/placeTime.ts';
import { slope } from './levelStretches.ts';
import type { SpeedTrace } from './steadySpeed.ts';

/** A car that slows harder than this is being braked: engine and drag alone stay below, but for a car with much downforce at top speed. */
const BRAKED_MPS2 = 4;
/** The braking is taken to begin and end where the slowing goes through this, between a closed throttle's and a brake's. */
const EDGE_MPS2 = 2.5;
const HALF_WINDOW_S = 0.15;

export interface DecelerationBraking {
	onsetS: number;
	offS: number;
	plusMinusS: number;
}

/**
 * Braking seen in the car's slowing alone, for runs without a brake channel: it stands in for onset and end, and for nothing else.
 *
 * @param trace speed of the run
 * @param fromS, toS  where the corner's braking may lie
 * @returns null where the car does not slow by over 4 m/s²
 */
export function decelerationBraking(trace: SpeedTrace, fromS: number, toS: number): DecelerationBraking | null {
	const { timeS, speedKmh, sampleS } = trace;
	const half = Math.max(1, Math.round(HALF_WINDOW_S / sampleS));
	const first = Math.max(half, sampleBefore(timeS, fromS));
	const last = Math.min(timeS.length - 1 - half, sampleBefore(timeS, toS));
	if (!(last - first >= 2)) return null;
	const slowing = new Float64Array(last - first + 1);
	let most = 0;
	for (let i = first; i <= last; i++) {
		slowing[i - first] = -slope(timeS, speedKmh, i - half, i + half) / KMH_PER_MPS;
		if (slowing[i - first] > slowing[most]) most = i - first;
	}
	if (!(slowing[most] > BRAKED_MPS2)) return null;
	let a = most;
	while (a > 0 && slowing[a - 1] >= EDGE_MPS2) a--;
	let b = most;
	while (b + 1 < slowing.length && slowing[b + 1] >= EDGE_MPS2) b++;
	const edge = (outside: number, inside: number) => {
		if (!(outside >= 0 && outside < slowing.length)) return timeS[first + inside];
		const share = (EDGE_MPS2 - slowing[outside]) / (slowing[inside] - slowing[outside]);
		return timeS[first + outside] + share * (timeS[first + inside] - timeS[first + outside]);
	};
	return { onsetS: edge(a - 1, a), offS: edge(b + 1, b), plusMinusS: HALF_WINDOW_S };
}
