import type { ReferenceTrace } from './referenceTrace.ts';

/** A pedal counts as pressed from here on, %. */
const PRESSED_PCT = 5;
/** Applications less than this apart are one: robots and some drivers pulse the pedal. */
const ONE_APPLICATION_S = 0.5;
/** An application is one when it reaches this, %. */
const LEAST_BRAKE_PCT = 10;
/** Without a brake channel: a deceleration that only brakes reach, m/s², held for this long. */
const BRAKING_MPS2 = 3;
const LEAST_BRAKING_S = 0.3;
/** The throttle is lifted when it stays under this, %, for this long. */
const LIFTED_PCT = 90;
const LEAST_LIFT_S = 0.15;
/** Full throttle, %. */
const FULL_PCT = 95;

/** Is the car braked at an entry of the trace? By the pedal, or by its deceleration where there is none. */
function brakedAt({ brakePct, speedMps, timeS }: ReferenceTrace, i: number): boolean {
	if (brakePct) return brakePct[i] > PRESSED_PCT;
	const [a, b] = [Math.max(i - 2, 0), Math.min(i + 2, speedMps.length - 1)];
	return (speedMps[a] - speedMps[b]) / (timeS[b] - timeS[a]) > BRAKING_MPS2;
}

/**
 * Does a new braking begin between two places? Pulses of one application do not count.
 *
 * @param from, to indices into the trace
 */
export function secondBraking(trace: ReferenceTrace, from: number, to: number): boolean {
	const { timeS, size } = trace;
	const [low, high] = [Math.max(Math.floor(from), 0), Math.min(Math.ceil(to), size - 1)];
	let lastBraked = -Infinity;
	for (let i = low; i >= 0 && timeS[low] - timeS[i] < ONE_APPLICATION_S; i--) {
		if (brakedAt(trace, i)) {
			lastBraked = timeS[i];
			break;
		}
	}
	for (let i = low; i <= high; i++) {
		if (!brakedAt(trace, i)) continue;
		if (timeS[i] - lastBraked > ONE_APPLICATION_S && isBraking(trace, i, high)) return true;
		lastBraked = timeS[i];
	}
	return false;
}

/** Is what begins here an application, and not a brush of the pedal? */
function isBraking(trace: ReferenceTrace, at: number, to: number): boolean {
	const { brakePct, timeS, size } = trace;
	const limit = Math.min(to, size - 1);
	for (let i = at; i <= limit && timeS[i] - timeS[at] < ONE_APPLICATION_S; i++) {
		if (brakePct && brakePct[i] >= LEAST_BRAKE_PCT) return true;
		if (!brakePct && brakedAt(trace, i) && timeS[i] - timeS[at] >= LEAST_BRAKING_S) return true;
	}
	return false;
}

/** What a stretch is driven with. */
export interface PedalUse {
	braked: boolean;
	lifted: boolean;
	/** is either pedal known? */
	known: boolean;
}

/** Braking and lifting within a stretch of the trace. */
export function pedalUse(trace: ReferenceTrace, from: number, to: number): PedalUse {
	const { brakePct, throttlePct, timeS, size } = trace;
	const [low, high] = [Math.max(Math.floor(from), 0), Math.min(Math.ceil(to), size - 1)];
	let braked = false;
	let lifted = false;
	let liftedSince = NaN;
	for (let i = low; i <= high; i++) {
		if (!braked && brakedAt(trace, i)) braked = isBraking(trace, i, high);
		if (!throttlePct) continue;
		if (!(throttlePct[i] < LIFTED_PCT)) liftedSince = NaN;
		else if (Number.isNaN(liftedSince)) liftedSince = timeS[i];
		else if (timeS[i] - liftedSince >= LEAST_LIFT_S) lifted = true;
	}
	return { braked, lifted, known: brakePct !== null || throttlePct !== null };
}

/** Is the car still slowing down at a place, on the brake or off the throttle? Then it slows for what comes next. */
export function slowingAt(trace: ReferenceTrace, at: number): boolean {
	const { throttlePct, speedMps, size } = trace;
	const i = Math.min(Math.max(Math.round(at), 1), size - 2);
	if (brakedAt(trace, i)) return true;
	return throttlePct !== null && throttlePct[i] < LIFTED_PCT && speedMps[i + 1] < speedMps[i - 1];
}

/** Longest time at full throttle within a stretch, s; 0 without a throttle channel. */
export function longestFullThrottle({ throttlePct, timeS, size }: ReferenceTrace, from: number, to: number): number {
	if (!throttlePct) return 0;
	let longest = 0;
	let since = NaN;
	for (let i = Math.max(Math.ceil(from), 0); i <= Math.min(to, size - 1); i++) {
		if (!(throttlePct[i] >= FULL_PCT)) since = NaN;
		else if (Number.isNaN(since)) since = timeS[i];
		else longest = Math.max(longest, timeS[i] - since);
	}
	return longest;
}
