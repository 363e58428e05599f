import type { Evidence } from '../../schemas/analysisDocument.ts';
import type { FindingCode } from '../../schemas/codes.ts';
import type { CornerPlaces } from '../compare/cornerPlaces.ts';
import type { BrakingStrength } from './brakingStrength.ts';
import type { Cornering } from './cornering.ts';
import { differenceOf, evidenceOf, type Difference, type MetricField, type MetricsPair } from './difference.ts';

/** A named cause in one corner before its seconds are known. */
export interface Cause {
	code: FindingCode;
	/** the metric that it stands on, for its ± and for the habit; null where it stands on the traces */
	field: MetricField | null;
	evidence: Evidence[];
}

/** Everything that is known of one corner in both laps. */
export interface CornerCase {
	place: CornerPlaces;
	pair: MetricsPair;
	strength: BrakingStrength | null;
	cornering: Cornering | null;
}

/** A share of the loss of one stage that goes to a cause. */
export interface CauseShare {
	cause: Cause;
	share: number;
}

/** Two causes share an earlier onset only where each explains more than this of it. */
const ONE_CAUSE_SHARE = 0.2;
/** Peaks and strengths nearer than this are the same braking. */
const SAME_STRENGTH = 0.97;
/** A driven radius below this share of the reference's is another line; lateral acceleration above the other share is the grip used. */
const TIGHTER_RADIUS = 0.93;
const GRIP_USED = 0.97;
const GRIP_LEFT = 0.93;
const LEAST_OFFSET_M = 0.8;
/** Coasting that is worth a word beside a low minimum speed. */
const LEAST_COASTING_S = 0.1;
/** An opening of the throttle longer than the reference's is a cause of its own from this share of the lateness on. */
const SLOW_OPENING_SHARE = 0.5;

const more = (difference: Difference | null): difference is Difference =>
	difference !== null && difference.counts && difference.by > 0;
const less = (difference: Difference | null): difference is Difference =>
	difference !== null && difference.counts && difference.by < 0;

function cause(c: CornerCase, code: FindingCode, field: MetricField, ...further: MetricField[]): Cause {
	const atM = c.place.corner.apexM;
	return { code, field, evidence: [field, ...further].map((name) => evidenceOf(c.pair, name, atM)) };
}

const whole = (found: Cause | null): CauseShare[] => (found ? [{ cause: found, share: 1 }] : []);

/** Off the throttle before the reference brakes: coasting where neither pedal is used, else an early lift. */
export function causesBeforeBrake(c: CornerCase): CauseShare[] {
	const lift = differenceOf(c.pair, 'liftM');
	const liftsAlone = c.pair.driver?.liftM != null && c.place.reference.flat;
	const liftCounts = less(lift) || liftsAlone;
	if (more(differenceOf(c.pair, 'coastingS')))
		return whole(cause(c, 'coasting', 'coastingS', ...(liftCounts ? (['liftM'] as const) : [])));
	return whole(liftCounts ? cause(c, 'brake_early', 'liftM') : null);
}

/**
 * Braking before the reference does. The part of the earlier onset that a weaker braking needs is written to the weakness (a lower peak,
 * or a longer release), the rest to the onset.
 */
export function causesOfEarlyBraking(c: CornerCase): CauseShare[] {
	const onset = differenceOf(c.pair, 'onsetM');
	if (onset === null)
		return whole(c.pair.driver?.onsetM != null && c.pair.reference ? cause(c, 'brake_early', 'onsetM') : null);
	// the same onset: what the gap grew by here is the end of an earlier lift
	if (!less(onset)) return causesBeforeBrake(c);
	const early = cause(c, 'brake_early', 'onsetM');
	const weak = weakBraking(c);
	if (!c.strength || !weak) return whole(early);
	const share = c.strength.laterByStrengthM / -onset.by;
	const slack = Math.max(onset.plusMinus / -onset.by, ONE_CAUSE_SHARE);
	if (share <= slack) return whole(early);
	if (share >= 1 - slack) return whole(weak);
	return [
		{ cause: weak, share },
		{ cause: early, share: 1 - share }
	];
}

function weakBraking(c: CornerCase): Cause | null {
	const { strength } = c;
	if (!strength || !(strength.driverMps2 < SAME_STRENGTH * strength.referenceMps2)) return null;
	const peak = differenceOf(c.pair, 'peakPct');
	const strengths: Evidence = {
		quantity: 'deceleration',
		unit: 'm/s²',
		driver: strength.driverMps2,
		reference: strength.referenceMps2,
		atM: c.pair.driver?.onsetM ?? null,
		plusMinus: null
	};
	if (less(peak)) {
		const named = cause(c, 'peak_under', 'peakPct', 'onsetM');
		return { ...named, evidence: [named.evidence[0], strengths, named.evidence[1]] };
	}
	return more(differenceOf(c.pair, 'releaseS')) ? cause(c, 'release_long', 'releaseS') : null;
}

/** Slowing down more than the reference, on the brake or off it, before the reference picks the throttle up. */
export function causesOfSlowing(c: CornerCase, onBrake: boolean): CauseShare[] {
	if (more(differenceOf(c.pair, 'lockUps'))) return whole(cause(c, 'lock_up', 'lockUps'));
	const minimum = differenceOf(c.pair, 'minKmh');
	const coasting = differenceOf(c.pair, 'coastingS');
	if (less(minimum)) {
		const line = tighterLine(c);
		if (line) return whole(line);
		const longer = more(differenceOf(c.pair, 'releaseEndM')) ? (['releaseEndM'] as const) : [];
		const rolls = !longer.length && more(coasting) && coasting.by > LEAST_COASTING_S ? (['coastingS'] as const) : [];
		return whole(cause(c, 'min_speed_low', 'minKmh', ...longer, ...rolls));
	}
	if (onBrake) {
		if (more(differenceOf(c.pair, 'peakPct'))) return whole(overPeak(c));
		if (more(differenceOf(c.pair, 'releaseS'))) return whole(cause(c, 'release_long', 'releaseS', 'releaseEndM'));
		if (more(differenceOf(c.pair, 'dabs'))) return whole(cause(c, 'second_dab', 'dabs'));
	}
	if (more(coasting)) return whole(cause(c, 'coasting', 'coastingS'));
	return whole(unusedGrip(c));
}

/** A peak over the reference's; that it slows no harder is said where it was measured. */
export function overPeak(c: CornerCase): Cause {
	const named = cause(c, 'peak_over', 'peakPct');
	const { strength } = c;
	if (strength && strength.driverMps2 <= strength.referenceMps2 * 1.01) {
		named.evidence.push({
			quantity: 'deceleration',
			unit: 'm/s²',
			driver: strength.driverMps2,
			reference: strength.referenceMps2,
			atM: c.pair.driver?.peakM ?? null,
			plusMinus: null
		});
	}
	return named;
}

function tighterLine(c: CornerCase): Cause | null {
	const { cornering } = c;
	if (!cornering || cornering.offsetM === null || !(Math.abs(cornering.offsetM) >= LEAST_OFFSET_M)) return null;
	if (!(cornering.driverRadiusM < TIGHTER_RADIUS * cornering.referenceRadiusM)) return null;
	if (!(cornering.driverMps2 >= GRIP_USED * cornering.referenceMps2)) return null;
	const { driverRadiusM: driver, referenceRadiusM: reference, atM, offsetM } = cornering;
	return {
		code: 'line',
		field: null,
		evidence: [
			{ quantity: 'radius', unit: 'm', driver, reference, atM, plusMinus: null },
			{ quantity: 'offset', unit: 'm', driver: offsetM, reference: 0, atM, plusMinus: null }
		]
	};
}

function unusedGrip(c: CornerCase): Cause | null {
	const { cornering } = c;
	if (!cornering || !(cornering.driverMps2 < GRIP_LEFT * cornering.referenceMps2)) return null;
	if (!(Math.abs(cornering.driverRadiusM / cornering.referenceRadiusM - 1) < 1 - TIGHTER_RADIUS)) return null;
	const { driverMps2: driver, referenceMps2: reference, atM } = cornering;
	return {
		code: 'grip_unused',
		field: null,
		evidence: [{ quantity: 'lateralAcceleration', unit: 'm/s²', driver, reference, atM, plusMinus: null }]
	};
}

/** Off the throttle after the reference picked it up. */
export function causesOfLatePickUp(c: CornerCase): CauseShare[] {
	const pickUp = differenceOf(c.pair, 'pickUpM');
	const picksUpAlone = pickUp === null && c.place.reference.flat && c.pair.driver?.pickUpM != null;
	if (more(pickUp) || picksUpAlone) return whole(cause(c, 'pick_up_late', 'pickUpM'));
	return whole(more(differenceOf(c.pair, 'coastingS')) ? cause(c, 'coasting', 'coastingS') : slowExit(c));
}

/** Opening the throttle: a late pick-up shifts the whole opening; what the opening itself takes longer is the exit's. */
export function causesOfSlowOpening(c: CornerCase): CauseShare[] {
	const late = causesOfLatePickUp(c).find(({ cause: { code } }) => code === 'pick_up_late');
	const exit = slowExit(c);
	if (!late) return whole(exit);
	const pickUp = differenceOf(c.pair, 'pickUpM');
	const full = differenceOf(c.pair, 'fullThrottleM');
	if (!pickUp || !full || !exit) return [late];
	const slower = full.by - pickUp.by;
	if (!(slower > SLOW_OPENING_SHARE * pickUp.by && slower > full.plusMinus)) return [late];
	const share = slower / full.by;
	return [
		{ cause: late.cause, share: 1 - share },
		{ cause: exit, share }
	];
}

function slowExit(c: CornerCase): Cause | null {
	if (!less(differenceOf(c.pair, 'exitKmh'))) return null;
	const full = more(differenceOf(c.pair, 'fullThrottleM')) ? (['fullThrottleM'] as const) : [];
	return cause(c, 'exit_speed_low', 'exitKmh', ...full);
}

/** Closing the throttle again after the pick-up. */
export function causesOfSecondLift(c: CornerCase): CauseShare[] {
	const lift = differenceOf(c.pair, 'secondLiftS');
	const alone = lift === null && (c.pair.driver?.secondLiftS ?? 0) > 0;
	return more(lift) || alone ? whole(cause(c, 'second_lift', 'secondLiftS')) : causesOfSlowOpening(c);
}

/** Braking later than the reference: time found on the way in. */
export function causesOfLateBraking(c: CornerCase): CauseShare[] {
	return whole(more(differenceOf(c.pair, 'onsetM')) ? cause(c, 'brake_late', 'onsetM') : null);
}

/** The gap between two linked corners. */
export function causesOfIdleGap(c: CornerCase): CauseShare[] {
	return whole(more(differenceOf(c.pair, 'idleGapS')) ? cause(c, 'idle_gap', 'idleGapS') : null);
}
