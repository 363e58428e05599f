import type { LapGrid } from '../model.ts';
import type { CornerPlaces } from './cornerPlaces.ts';

/**
 * What the driver does differently at a place, by both laps' own events: the stage decides which corner and which kind of cause
 * a growing (or shrinking) speed gap is written to. Names of causes come later, from the metrics.
 */
export const STAGE_KINDS = [
	/** off the throttle, not yet on the brake, while the reference has not braked */
	'coastBefore',
	/** braking while the reference does not yet */
	'approach',
	/** not yet braking while the reference does (the driver gains here) */
	'lateBrake',
	/** slowing down on the brake, past both onsets */
	'slowing',
	/** slowing down off the brake, before the reference's pick-up */
	'rolling',
	/** off the throttle after the reference picked up */
	'pickUp',
	/** opening the throttle, not yet full */
	'ramp',
	/** closing it again */
	'secondLift',
	/** between two linked corners, neither turning nor accelerating hard */
	'idle',
	/** both at full throttle */
	'straight'
] as const;
export type StageKind = (typeof STAGE_KINDS)[number];

/** Pool 0 is what the lap began with, pool 1 what no stage is charged with; then STAGE_KINDS for each owner (0: the run-up). */
export const CARRIED_IN = 0;
export const REST = 1;

/** Pool of an owner's stage; owner 0 is the run-up, owner k the k-th corner. */
export function poolOf(owner: number, kind: StageKind): number {
	return 2 + owner * STAGE_KINDS.length + STAGE_KINDS.indexOf(kind);
}

/** For each metre from `fromM`: the pool that a growing loss and a growing gain are written to, and the owner. */
export interface StagePlan {
	pools: number;
	loss: Int16Array;
	gain: Int16Array;
	owner: Int16Array;
	/** 1 where both laps are at full throttle */
	straight: Uint8Array;
	/** by index, the owner whose lowest speed is reached there: from then on what is left of an early braking is a low minimum speed */
	slowest: Map<number, number>;
}

/** As in the definition of full throttle, with room for a pedal that does not quite reach its stop. */
const FULL_PCT = 92;
/** A throttle that falls by more than this from its highest opening is lifted again. */
const SECOND_LIFT_PCT = 20;

/**
 * A gap shows a little before the event that opens it, since speed is read over some metres and a pedal moves before it crosses its
 * threshold, and goes on a little after the event that closes it.
 */
const BLUR_M = 4;

/** Has the lap passed this event; an event that never happens is never passed. */
const passed = (placeM: number, event: number | null): boolean => event !== null && placeM >= event;
const opens = (placeM: number, event: number | null): boolean => passed(placeM + BLUR_M, event);
const closes = (placeM: number, event: number | null): boolean => passed(placeM - BLUR_M, event);

/** Where both laps have reached their lowest speed, within the corner. */
function bothSlowestM({ driver, reference, apexM, endM }: CornerPlaces): number {
	return Math.min(Math.max(driver.minSpeedM ?? apexM, reference.minSpeedM ?? apexM), endM);
}

/** Stage of a loss while the reference has neither lifted nor braked: it is flat here, or its own braking is still to come. */
function lossWhileReferenceDrives({ driver }: CornerPlaces, atM: number): StageKind | null {
	if (opens(atM, driver.onsetM)) return 'approach';
	return opens(atM, driver.liftM) ? 'coastBefore' : null;
}

/** Stage that a growing loss at a place belongs to; null where the driver does nothing else than the reference. */
function lossStage(place: CornerPlaces, atM: number): StageKind | null {
	const { driver, reference } = place;
	const pickedUp = closes(atM, driver.pickUpM);
	if (reference.flat) {
		if (pickedUp) return 'ramp';
		return passed(atM, driver.releaseEndM) ? 'pickUp' : lossWhileReferenceDrives(place, atM);
	}
	// without a pick-up a corner is slowed down for until both laps have reached their lowest speed
	if (opens(atM, reference.pickUpM ?? bothSlowestM(place) + 2 * BLUR_M))
		return pickedUp || driver.pickUpM === null ? 'ramp' : 'pickUp';
	const braking = opens(atM, driver.onsetM) && !passed(atM, driver.releaseEndM ?? driver.pickUpM);
	if (reference.onsetM === null) {
		if (braking) return 'approach';
		return reference.liftM !== null && !closes(atM, reference.liftM) ? lossWhileReferenceDrives(place, atM) : 'rolling';
	}
	if (!closes(atM, reference.onsetM)) return lossWhileReferenceDrives(place, atM);
	return braking ? 'slowing' : 'rolling';
}

/** Does the driver stay off the brake here while the reference is on it? */
function brakesLater({ driver, reference }: CornerPlaces, atM: number): boolean {
	return opens(atM, reference.onsetM) && !passed(atM, reference.releaseEndM) && !closes(atM, driver.onsetM);
}

/**
 * Lays the stages over the lap.
 *
 * @param places  numbered corners in driving order
 * @param entriesM where each corner's entry begins, unwrapped, as in the ledger before it is held to the lap
 * @param idle    for each corner, whether the driver's idle gap towards the next one counts
 * @param slower  for each corner, whether the driver's minimum speed is lower
 * @param locks   for each corner, whether the driver locks a wheel more often: it slows down less then, and is given what that finds
 * @param fromM   first whole metre
 * @param toM     last whole metre
 */
export function planStages(
	places: readonly CornerPlaces[],
	entriesM: readonly number[],
	idle: readonly boolean[],
	slower: readonly boolean[],
	locks: readonly boolean[],
	driver: LapGrid,
	reference: LapGrid,
	fromM: number,
	toM: number
): StagePlan {
	const n = toM - fromM + 1;
	const loss = new Int16Array(n).fill(REST);
	const gain = new Int16Array(n).fill(REST);
	const owner = new Int16Array(n);
	const straight = new Uint8Array(n);
	// the lowest opening over the next metres, so that a lift begins as early as the gap that it opens
	const throttle = (grid: LapGrid, atM: number): number => {
		let low = NaN;
		for (let m = 0; m <= BLUR_M; m++) {
			const value = grid.throttlePct?.[atM + m + grid.marginM] ?? NaN;
			if (!(value >= low)) low = value;
		}
		return low;
	};
	let k = 0;
	let opening = 0;
	for (let i = 0; i < n; i++) {
		const atM = fromM + i;
		while (k < places.length && opens(atM, entriesM[k])) {
			k++;
			opening = 0;
		}
		owner[i] = k;
		const driverPct = throttle(driver, atM);
		const bothFull = driverPct >= FULL_PCT && throttle(reference, atM) >= FULL_PCT;
		if (k === 0) {
			loss[i] = gain[i] = bothFull ? poolOf(0, 'straight') : CARRIED_IN;
			straight[i] = bothFull ? 1 : 0;
			continue;
		}
		const place = places[k - 1];
		const neitherLifts = place.driver.liftM === null && place.reference.liftM === null;
		if (bothFull && (neitherLifts || passed(atM, place.driver.pickUpM ?? place.apexM))) {
			loss[i] = gain[i] = poolOf(k, 'straight');
			straight[i] = 1;
			continue;
		}
		const own = lossStage(place, atM);
		if (own === 'ramp' && driverPct > opening) opening = driverPct;
		const lifted = own === 'ramp' && driverPct < opening - SECOND_LIFT_PCT;
		const idling = idle[k - 1] && atM >= place.endM && (k === places.length || atM < places[k].startM);
		const kind = idling ? 'idle' : lifted ? 'secondLift' : own;
		if (kind) loss[i] = poolOf(k, kind);
		if (brakesLater(place, atM)) gain[i] = poolOf(k, 'lateBrake');
		else if (locks[k - 1] && opens(atM, place.driver.onsetM) && atM <= place.endM) gain[i] = poolOf(k, 'slowing');
	}
	const slowest = new Map<number, number>();
	places.forEach((place, at) => {
		const i = Math.round(bothSlowestM(place)) - fromM;
		if (slower[at] && i > 0 && i < n) slowest.set(i, at + 1);
	});
	return { pools: 2 + (places.length + 1) * STAGE_KINDS.length, loss, gain, owner, straight, slowest };
}
