import type { LockUp, Wheel } from '../../schemas/analysisDocument.ts';
import type { Channels } from '../model.ts';
import { sampleBefore } from '../trace/placeTime.ts';
import { wheelSlips } from './wheelSlip.ts';

/** Domain: a wheel turns this much slower than the ground passes under it … */
const LOCK_SLIP = -0.3;
/** … for this long … */
const LEAST_S = 0.05;
/** … while braking above this. */
const SLOWEST_KMH = 20;
/** A downshift this long before a rear lock, or this shortly after its begin, belongs to it. */
const SHIFT_BEFORE_S = 0.4;
const SHIFT_AFTER_S = 0.1;
/** A lock that began under braking may outlast the brake by this. */
const OUTLASTS_S = 0.5;
/** A wheel that rolls for less than this between two locks never got its grip back. */
const ONE_EVENT_GAP_S = 0.04;
/** A sensor that drops out goes to zero and comes back from one sample to the next; a wheel has inertia. Told apart at this sampling or finer. */
const DROP_OUT_SAMPLE_S = 0.025;
const STANDING_SHARE = 0.02;
const ROLLING_SHARE = 0.8;

/** A lock-up before it is known in which lap and corner it happened. */
export type WheelLock = Omit<LockUp, 'lap' | 'corner'>;

/**
 * Lock-ups of a run: every stretch in which a wheel's slip (v_wheel − v)/v is below −0.3 for 0.05 s while the car brakes above 20 km/h.
 *
 * v is the ground's speed at that wheel (see `wheelSlips`). Begin and end are interpolated; a rear lock at a downshift is marked. O(n).
 *
 * @param channels the run; `wheelKmh` may be off by a constant factor per wheel
 * @param curvaturePerM of the car's own line, where known: stands in for a missing yaw rate
 * @returns in order of time; empty without wheel speeds
 */
export function lockUps(channels: Channels, curvaturePerM: Float64Array | null = null): WheelLock[] {
	const slips = wheelSlips(channels, curvaturePerM);
	if (!slips) return [];
	const { timeS, speedKmh } = channels;
	const braking = brakingSamples(timeS, speedKmh, slips.isBraking);
	return slips.wheels
		.flatMap((wheel) => locksOf(channels, wheel, (i) => slips.slipAt(wheel, i), braking))
		.map((lock) => ({ ...lock, atDownshift: atDownshift(channels, lock) }))
		.sort((a, b) => a.startS - b.startS || a.wheel.localeCompare(b.wheel));
}

/** Does a rear wheel lock where the gear goes down; null where gears are not known. */
function atDownshift({ timeS, gear }: Channels, { wheel, startS }: WheelLock): boolean | null {
	if (!gear) return null;
	if (wheel !== 'rl' && wheel !== 'rr') return false;
	const last = Math.min(sampleBefore(timeS, startS + SHIFT_AFTER_S), timeS.length - 2);
	for (let i = Math.max(0, sampleBefore(timeS, startS - SHIFT_BEFORE_S)); i <= last; i++)
		if (gear[i + 1] < gear[i]) return true;
	return false;
}

/** 2: the brake is on; 1: it was within the last half second; 0: neither, or too slow. */
function brakingSamples(timeS: Float64Array, speedKmh: Float64Array, isBraking: (i: number) => boolean): Uint8Array {
	const state = new Uint8Array(timeS.length);
	let lastS = -Infinity;
	for (let i = 0; i < timeS.length; i++) {
		if (!(speedKmh[i] > SLOWEST_KMH)) continue;
		if (isBraking(i)) {
			lastS = timeS[i];
			state[i] = 2;
		} else if (timeS[i] - lastS < OUTLASTS_S) state[i] = 1;
	}
	return state;
}

function locksOf(channels: Channels, wheel: Wheel, slipAt: (i: number) => number, braking: Uint8Array): WheelLock[] {
	const { timeS, sampleRateHz } = channels;
	const found: WheelLock[] = [];
	let current: (WheelLock & { firstIndex: number; lastIndex: number }) | null = null;
	const close = () => {
		if (current && !isDropOut(current, slipAt, 1 / sampleRateHz)) {
			const { startS, endS, lowestSlip } = current;
			const last = found.at(-1);
			if (last && startS - last.endS < ONE_EVENT_GAP_S) {
				last.endS = endS;
				last.lowestSlip = Math.min(last.lowestSlip, lowestSlip);
			} else found.push({ wheel, startS, endS, lowestSlip });
		}
		current = null;
	};
	for (let i = 1; i < timeS.length; i++) {
		if (braking[i] === 0) {
			if (current) close();
			continue;
		}
		const slip = slipAt(i);
		if (slip < LOCK_SLIP) {
			if (!current && braking[i] === 2) {
				current = {
					wheel,
					startS: edge(timeS, slipAt, i - 1),
					endS: timeS[i],
					lowestSlip: slip,
					firstIndex: i,
					lastIndex: i
				};
			} else if (current) {
				current.endS = timeS[i];
				current.lastIndex = i;
				current.lowestSlip = Math.min(current.lowestSlip, slip);
			}
		} else if (current) {
			if (slip >= LOCK_SLIP) current.endS = edge(timeS, slipAt, i - 1);
			close();
		}
	}
	if (current) close();
	return found.filter(({ startS, endS }) => endS - startS >= LEAST_S - 1e-9);
}

/** When the slip goes through −0.3 between samples i and i + 1. */
function edge(timeS: Float64Array, slipAt: (i: number) => number, i: number): number {
	const [a, b] = [slipAt(i), slipAt(i + 1)];
	const share = (LOCK_SLIP - a) / (b - a);
	return timeS[i] + (share >= 0 && share <= 1 ? share : a < LOCK_SLIP ? 0 : 1) * (timeS[i + 1] - timeS[i]);
}

function isDropOut(
	{ firstIndex, lastIndex }: { firstIndex: number; lastIndex: number },
	slipAt: (i: number) => number,
	sampleS: number
): boolean {
	if (sampleS > DROP_OUT_SAMPLE_S) return false;
	const stands = (i: number) => 1 + slipAt(i) < STANDING_SHARE;
	const rolls = (i: number) => 1 + slipAt(i) > ROLLING_SHARE;
	return stands(firstIndex) && stands(lastIndex) && rolls(firstIndex - 1) && rolls(lastIndex + 1);
}
