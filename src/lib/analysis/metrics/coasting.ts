import { sampleBefore } from '../trace/placeTime.ts';
import { ONSET_PCT } from './brakeApplications.ts';
import { crossing, type Signal } from './crossing.ts';
import { CLOSED_PCT } from './throttleEvents.ts';

export interface Span {
	startS: number;
	endS: number;
}

/** Neither pedal pressed, in s: in all, and its shares before, between and after the brakings. */
export interface Coasting {
	totalS: number;
	beforeS: number;
	betweenS: number;
	afterS: number;
}

/**
 * Time with the throttle under 5 % and the brake off, from the lift to the pick-up.
 *
 * @param throttle % from rest
 * @param span     lift to pick-up
 * @param brakings from leaving the off level to being off, in order; those outside the span do not matter
 * @param quickestFall see `throttleEvents`
 */
export function coasting(throttle: Signal, span: Span, brakings: Span[], quickestFall: number | null): Coasting {
	const within = brakings.filter((braking) => braking.endS > span.startS && braking.startS < span.endS);
	const result: Coasting = { totalS: 0, beforeS: 0, betweenS: 0, afterS: 0 };
	for (const closed of spansBelow(throttle, CLOSED_PCT, span, quickestFall)) {
		let from = closed.startS;
		within.concat({ startS: Infinity, endS: Infinity }).forEach((braking, i) => {
			const lengthS = Math.min(closed.endS, braking.startS) - from;
			if (lengthS > 0) {
				result.totalS += lengthS;
				if (i === 0 && within.length > 0) result.beforeS += lengthS;
				else if (i === within.length) result.afterS += lengthS;
				else result.betweenS += lengthS;
			}
			from = Math.max(from, braking.endS);
		});
	}
	return result;
}

/**
 * Time with both pedals over 5 %.
 *
 * @param span a braking, onset to off
 */
export function overlap(throttle: Signal, brake: Signal, span: Span): number {
	// the margin lets crossings at the ends see the slopes beside them
	const first = Math.max(0, sampleBefore(brake.timeS, span.startS) - 3);
	const last = Math.min(brake.timeS.length, sampleBefore(brake.timeS, span.endS) + 4);
	const released = brake.values.subarray(first, last).map((pct) => -pct);
	const braked = spansBelow(
		{ ...brake, timeS: brake.timeS.subarray(first, last), values: released },
		-ONSET_PCT,
		span,
		null
	);
	let total = 0;
	for (const one of braked) {
		let openS = one.endS - one.startS;
		for (const closed of spansBelow(throttle, CLOSED_PCT, one, null)) openS -= closed.endS - closed.startS;
		total += Math.max(0, openS);
	}
	return total;
}

/** Stretches of a span in which a signal is below a level, with crossings between samples. */
function spansBelow(signal: Signal, level: number, span: Span, quickestFall: number | null): Span[] {
	const { timeS, values } = signal;
	const first = Math.max(0, sampleBefore(timeS, span.startS));
	const last = Math.min(timeS.length - 2, sampleBefore(timeS, span.endS));
	const found: Span[] = [];
	let since = values[first] < level ? span.startS : NaN;
	for (let i = first; i <= last; i++) {
		const below = values[i + 1] < level;
		if (values[i] < level === below) continue;
		const atS = crossing(signal, i, level, below ? quickestFall : null).timeS;
		if (below) since = atS;
		else {
			found.push({ startS: Math.max(since, span.startS), endS: Math.min(atS, span.endS) });
			since = NaN;
		}
	}
	if (since < span.endS) found.push({ startS: Math.max(since, span.startS), endS: span.endS });
	return found.filter((one) => one.endS > one.startS);
}
