import type { Channels } from '../model.ts';
import { sampleBefore } from '../trace/placeTime.ts';
import { wheelSlips } from './wheelSlip.ts';

/** A wheel that turns this much faster than the ground spins. */
const SPIN_SLIP = 0.1;
const ON_THROTTLE_PCT = 20;
const SLOWEST_KMH = 20;
/** Shorter is a kerb or a gear change. */
const LEAST_S = 0.1;

/**
 * Time with a wheel spinning under power: slip above 0.1 on the throttle, in stretches of 0.1 s and more.
 *
 * @param curvaturePerM of the car's own line, where known
 * @param fromS, toS apex and a little behind the corner's end
 * @returns s; null without wheel speeds or throttle
 */
export function wheelSpin(
	channels: Channels,
	curvaturePerM: Float64Array | null,
	fromS: number,
	toS: number
): number | null {
	const { timeS, throttlePct, speedKmh } = channels;
	const slips = throttlePct && wheelSlips(channels, curvaturePerM);
	if (!slips || !throttlePct) return null;
	let total = 0;
	let run = 0;
	const last = Math.min(sampleBefore(timeS, toS), timeS.length - 2);
	for (let i = Math.max(0, sampleBefore(timeS, fromS)); i <= last; i++) {
		const spins =
			throttlePct[i] > ON_THROTTLE_PCT &&
			speedKmh[i] > SLOWEST_KMH &&
			slips.wheels.some((wheel) => slips.slipAt(wheel, i) > SPIN_SLIP);
		if (spins) run += timeS[i + 1] - timeS[i];
		if (spins && i < last) continue;
		if (run >= LEAST_S - 1e-9) total += run;
		run = 0;
	}
	return total;
}
