import { sampleBefore } from '../trace/placeTime.ts';
import { crossing, type Moment, type Signal } from './crossing.ts';

export const CLOSED_PCT = 5;
export const FULL_PCT = 95;
/** Domain: dips shorter than this are closed, and a second lift lasts longer. */
const DIP_S = 0.5;
/** Domain: a second lift is a dip of more than this. */
const SECOND_LIFT_PCT = 20;
/** Throttle that is open when the brake comes off is picked up if it stays for this long; else it was a blip for a downshift. */
const BLIP_S = 0.3;
/** The foot may still be on the throttle for this long after the brake's onset. */
const CROSSOVER_S = 0.3;
/** A fall by less is no lift: a foot moves that much on a kerb. */
const LIFT_LEAST_PCT = 10;
/** A throttle that comes back sooner was cut by the car, not lifted by the driver. */
const LIFT_LEAST_S = 0.1;

export interface ThrottleWindow {
	/** apex of the corner before: lifts before that belong to it */
	earliestS: number;
	/** braking for this corner, if any */
	brakeOnsetS: number | null;
	brakeOffS: number | null;
	/** where an unbraked corner is lifted for */
	fromS: number;
	toS: number;
	/** the next corner's braking or apex: what comes then belongs to it */
	untilS: number;
	/** the next corner's start */
	nextStartS: number;
}

export interface ThrottleEvents {
	/** closed: under 5 %; partly: lifted but never closed; flat: never under 95 %; steady: neither lifted nor full */
	kind: 'closed' | 'partly' | 'flat' | 'steady';
	/** last fall below 95 % (or from the most that was given since the corner before) */
	lift: Moment | null;
	smallestPct: number;
	smallestS: number;
	/** first rise above 5 % after the brake is off, or after the lift */
	pickUp: Moment | null;
	/** first rise above 95 % after that */
	full: Moment | null;
	/** s of later dips by over 20 % for over 0.5 s */
	secondLiftS: number;
}

/**
 * What the throttle did for one corner.
 *
 * @param throttle % from rest
 * @param window   where to look, in times of the run
 * @param quickestFall slope of the run's quickest lifts, % per s, null where unknown
 */
export function throttleEvents(throttle: Signal, window: ThrottleWindow, quickestFall: number | null): ThrottleEvents {
	const { timeS, values } = throttle;
	const index = (atS: number) => Math.min(Math.max(sampleBefore(timeS, atS), 0), timeS.length - 1);
	const until = index(window.untilS);
	const earliest = index(window.earliestS);
	const braked = window.brakeOnsetS !== null && window.brakeOffS !== null;
	const pickUpIndex = braked
		? pickUpAfterBrake(throttle, index(window.brakeOnsetS ?? 0), index(window.brakeOffS ?? 0), until)
		: -1;
	// an unbraked corner: the smallest opening in it, or on the way into it
	const smallest = braked
		? smallestIndex(
				values,
				index(window.brakeOnsetS ?? 0),
				pickUpIndex >= 0 ? pickUpIndex : index(window.brakeOffS ?? 0)
			)
		: smallestLift(throttle, Math.max(earliest, index(window.fromS)), index(window.toS));
	const events: ThrottleEvents = {
		kind: 'closed',
		lift: null,
		smallestPct: values[smallest],
		smallestS: timeS[smallest],
		pickUp: null,
		full: null,
		secondLiftS: 0
	};
	if (!braked && values[smallest] >= FULL_PCT) return { ...events, kind: 'flat' };

	const lift = liftBefore(
		throttle,
		braked ? index((window.brakeOnsetS ?? 0) + CROSSOVER_S) : smallest,
		smallest,
		earliest
	);
	if (lift) events.lift = crossing(throttle, lift.index, lift.level, quickestFall);
	if (!braked && !lift) return { ...events, kind: 'steady' };
	const picked = braked
		? pickUpIndex
		: values[smallest] < CLOSED_PCT
			? risesAbove(values, CLOSED_PCT, firstClosed(values, lift, smallest), until)
			: -1;
	if (picked >= 0) events.pickUp = crossing(throttle, picked, CLOSED_PCT);
	else if (values[smallest] >= CLOSED_PCT) events.kind = 'partly';
	if (picked < 0 && events.kind !== 'partly') return events;

	const from = picked >= 0 ? picked : smallest;
	const full = risesAbove(values, FULL_PCT, from, until);
	if (full >= 0) events.full = crossing(throttle, full, FULL_PCT);
	events.secondLiftS = secondLift(throttle, from, Math.min(until, index(window.nextStartS)));
	return events;
}

/** Sample before the pick-up that follows a braking, −1 where there is none. */
function pickUpAfterBrake({ timeS, values }: Signal, onset: number, off: number, until: number): number {
	const openAtOff = values[Math.min(off + 1, values.length - 1)] >= CLOSED_PCT;
	if (!openAtOff || off >= until) return risesAbove(values, CLOSED_PCT, off, until);
	let end = off + 1;
	while (end < until && values[end] >= CLOSED_PCT) end++;
	if (end < until && timeS[end] - timeS[off] < BLIP_S) return risesAbove(values, CLOSED_PCT, end, until);
	// both pedals overlapped: the rise lies before the brake came off
	let start = off;
	while (start > onset && values[start] >= CLOSED_PCT) start--;
	return values[start] < CLOSED_PCT ? start : -1;
}

/** First i in from … until − 1 with a rise through the level between i and i + 1; −1 for none. */
function risesAbove(values: Float64Array, level: number, from: number, until: number): number {
	for (let i = from; i < until; i++) if (values[i] < level && values[i + 1] >= level) return i;
	return -1;
}

function smallestIndex(values: Float64Array, from: number, to: number): number {
	let smallest = from;
	for (let i = from; i <= to; i++) if (!(values[i] >= values[smallest])) smallest = i;
	return smallest;
}

/** The smallest opening of the stretches below 95 % that last; where none does, of what is left. */
function smallestLift({ timeS, values }: Signal, from: number, to: number): number {
	let smallest = -1;
	let since = -1;
	for (let i = from; i <= to + 1; i++) {
		if (i <= to && values[i] < FULL_PCT) {
			if (since < 0) since = i;
			continue;
		}
		if (since >= 0 && (since === from || i > to || timeS[i] - timeS[since] >= LIFT_LEAST_S)) {
			const here = smallestIndex(values, since, i - 1);
			if (smallest < 0 || values[here] < values[smallest]) smallest = here;
		}
		since = -1;
	}
	return smallest >= 0 ? smallest : largestIndex(values, from, to);
}

function largestIndex(values: Float64Array, from: number, to: number): number {
	let largest = from;
	for (let i = from; i <= to; i++) if (values[i] > values[largest]) largest = i;
	return largest;
}

/** The last fall below 95 % before an index; where full throttle was never reached since `earliest`, from 95 % of the most that was. */
function liftBefore({ values }: Signal, before: number, smallest: number, earliest: number) {
	const lastFall = (level: number, from: number) => {
		for (let i = from; i >= earliest; i--) if (values[i] >= level && values[i + 1] < level) return { index: i, level };
		return null;
	};
	const last = Math.min(before, values.length - 2);
	const fall = lastFall(FULL_PCT, last) ?? lastFall(FULL_PCT, Math.min(Math.max(smallest, last), values.length - 2));
	if (fall) return fall;
	let most = 0;
	for (let i = earliest; i <= Math.max(last, smallest); i++) if (values[i] > most) most = values[i];
	if (most >= FULL_PCT || most - values[smallest] < LIFT_LEAST_PCT) return null;
	return lastFall((FULL_PCT / 100) * most, Math.min(Math.max(smallest, last), values.length - 2));
}

function firstClosed(values: Float64Array, lift: { index: number } | null, smallest: number): number {
	for (let i = lift ? lift.index : smallest; i < smallest; i++) if (values[i] < CLOSED_PCT) return i;
	return smallest;
}

/** Time in dips by over 20 % that last over 0.5 s and are recovered from. */
function secondLift(throttle: Signal, from: number, until: number): number {
	const { values } = throttle;
	let total = 0;
	let most = 0;
	for (let i = from; i < until; i++) {
		if (values[i] > most) most = values[i];
		if (!(values[i] >= most - SECOND_LIFT_PCT && values[i + 1] < most - SECOND_LIFT_PCT)) continue;
		const fallS = crossing(throttle, i, most - SECOND_LIFT_PCT).timeS;
		const back = risesAbove(values, most - SECOND_LIFT_PCT, i + 1, until);
		if (back < 0) break;
		const lengthS = crossing(throttle, back, most - SECOND_LIFT_PCT).timeS - fallS;
		if (lengthS > DIP_S) total += lengthS;
		i = back;
	}
	return total;
}
