import type { CornerMetrics, Evidence } from '../../schemas/analysisDocument.ts';
import type { FindingCode } from '../../schemas/codes.ts';
import type { CornerPlaces } from '../compare/cornerPlaces.ts';
import type { LapGrid } from '../model.ts';
import type { BrakingStrength } from './brakingStrength.ts';
import type { Cornering } from './cornering.ts';
import { scrub } from './scrub.ts';
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
	/** share of the run's own grip used in the middle of the corner; null where not known */
	gripShare: { driver: number; reference: number } | null;
	/** metrics of the run's clean laps in this corner */
	ownLaps: readonly CornerMetrics[];
	driverGrid: LapGrid;
	referenceGrid: LapGrid;
}

/** A share of the loss of one stage that goes to a cause. */
export interface CauseShare {
	cause: Cause;
	share: number;
}

/** A pick-up has waited for the brake where the brake explains this share of its lateness. */
const WAITED_SHARE = 0.7;
/** Room in what a late pick-up can explain: acceleration is highest right after it. */
const LATENESS_ROOM = 1.5;
/** Two causes share an earlier onset, or an exit, only where each explains more than this of it. */
const ONE_CAUSE_SHARE = 0.2;
/** Peaks and strengths nearer than this are the same braking. */
const SAME_STRENGTH = 0.97;
/** Deceleration up to this share of the reference's is no harder braking. */
const NO_HARDER = 1.01;
/** A driven radius below this share of the reference's is another line; lateral acceleration above the other share is the grip used. */
const TIGHTER_RADIUS = 0.93;
const GRIP_USED = 0.97;
const GRIP_LEFT = 0.93;
const LEAST_OFFSET_M = 0.8;
/** Share of the run's own acceleration envelope under which grip is left, and how far under the reference's. */
export const LEAST_GRIP_SHARE = 0.85;
const LEAST_GRIP_APART = 0.08;
/** What is worth a word beside the finding that it belongs to. */
const LEAST_COASTING_S = 0.1;
const LEAST_TOLD_M = 2;
export const LEAST_SPIN_S = 0.15;
/** From here on full throttle is late by hesitation where the pick-up is not. */
export const LEAST_HESITATION_M = 8;
/** A peak nearer to the reference's than this explains no earlier onset. */
const LEAST_PEAK_PCT = 5;
/** An opening of the throttle longer than the reference's is a cause of its own from this share of the lateness on. */
const SLOW_OPENING_SHARE = 0.5;

const more = (difference: Difference | null): difference is Difference =>
	difference !== null && difference.counts && difference.by > 0;
const moreBy = (difference: Difference | null, least: number): boolean => more(difference) && difference.by >= least;
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
	if (!liftCounts) return [];
	if (liftsAlone && c.pair.driver?.onsetM == null) return whole(extraLift(c));
	const coasts = more(differenceOf(c.pair, 'coastingS'));
	return whole(coasts ? coasted(c, 'liftM') : cause(c, 'brake_early', 'liftM'));
}

/** A lift for a corner that the reference takes at full throttle. */
function extraLift(c: CornerCase): Cause {
	const opening = c.pair.driver?.smallestOpeningPct == null ? [] : (['smallestOpeningPct'] as const);
	return cause(c, 'lift_extra', 'liftM', ...opening);
}

/** Coasting with those of its three shares that are longer than the reference's. */
function coasted(c: CornerCase, ...further: MetricField[]): Cause {
	const shares = (['coastBeforeS', 'coastBetweenS', 'coastAfterS'] as const).filter((field) =>
		moreBy(differenceOf(c.pair, field), LEAST_COASTING_S)
	);
	return cause(c, 'coasting', 'coastingS', ...further, ...shares);
}

/**
 * Braking before the reference does. The part of the earlier onset that a lower peak needs, since it slows the car less, is written to
 * the peak, the rest to the onset.
 */
export function causesOfEarlyBraking(c: CornerCase): CauseShare[] {
	const onset = differenceOf(c.pair, 'onsetM');
	if (onset === null)
		return whole(c.pair.driver?.onsetM != null && c.pair.reference ? cause(c, 'brake_early', 'onsetM') : null);
	// the same onset: what the gap grew by here is the end of an earlier lift, or the beginning of a harder braking
	if (!less(onset)) return less(differenceOf(c.pair, 'liftM')) ? causesBeforeBrake(c) : causesOfSlowing(c, true);
	const early = cause(c, 'brake_early', 'onsetM');
	const weak = weakPeak(c, onset);
	const slack = Math.max(onset.plusMinus / -onset.by, ONE_CAUSE_SHARE);
	if (!weak || weak.share <= slack) return whole(early);
	if (weak.share >= 1 - slack) return whole(weak.cause);
	return [weak, { cause: early, share: 1 - weak.share }];
}

/** How much of an earlier onset a lower peak needs; null where the braking is not weaker, or its peak not lower. */
function weakPeak(c: CornerCase, onset: Difference): CauseShare | null {
	const { strength } = c;
	if (!strength || !(strength.driverMps2 < SAME_STRENGTH * strength.referenceMps2)) return null;
	const peak = differenceOf(c.pair, 'peakPct');
	if (!less(peak) || -peak.by < LEAST_PEAK_PCT) return null;
	const named = cause(c, 'peak_under', 'peakPct', 'onsetM');
	const strengths = strengthEvidence(strength, c.pair.driver?.onsetM ?? null);
	// deceleration can follow the peak, not fall further than it
	const weaker = 1 - strength.driverMps2 / strength.referenceMps2;
	const ofPeak = Math.min(1, (1 - peak.driver / peak.reference) / weaker);
	return {
		cause: { ...named, evidence: [named.evidence[0], strengths, named.evidence[1]] },
		share: (ofPeak * strength.laterByStrengthM) / -onset.by
	};
}

function strengthEvidence({ driverMps2, referenceMps2 }: BrakingStrength, atM: number | null): Evidence {
	return {
		quantity: 'deceleration',
		unit: 'm/s²',
		driver: driverMps2,
		reference: referenceMps2,
		atM,
		plusMinus: null
	};
}

/** Slowing down more than the reference, on the brake or off it, before the reference picks the throttle up. */
export function causesOfSlowing(c: CornerCase, onBrake: boolean): CauseShare[] {
	const lock = locked(c);
	if (lock) return whole(lock);
	const minimum = differenceOf(c.pair, 'minKmh');
	const coasting = differenceOf(c.pair, 'coastingS');
	if (less(minimum)) {
		const line = tighterLine(c);
		if (line) return whole(line);
		const longer = moreBy(differenceOf(c.pair, 'releaseEndM'), LEAST_TOLD_M) ? (['releaseEndM'] as const) : [];
		const rolls = !longer.length && moreBy(coasting, LEAST_COASTING_S) ? (['coastingS'] as const) : [];
		return whole(cause(c, 'min_speed_low', 'minKmh', ...longer, ...rolls));
	}
	if (onBrake) {
		if (more(differenceOf(c.pair, 'peakPct')) && knowsFullBrake(c)) return whole(overPeak(c));
		if (more(differenceOf(c.pair, 'releaseS'))) return whole(cause(c, 'release_long', 'releaseS', 'releaseEndM'));
		if (more(differenceOf(c.pair, 'dabs'))) return whole(cause(c, 'second_dab', 'dabs'));
	}
	if (more(coasting)) return whole(coasted(c));
	return whole(unusedGrip(c));
}

/** A wheel that locks more often than the reference's; a rear one at a downshift is its own cause. */
export function locked(c: CornerCase): Cause | null {
	const atDownshift = more(differenceOf(c.pair, 'rearLocks'));
	if (!atDownshift && !more(differenceOf(c.pair, 'lockUps'))) return null;
	const named = atDownshift ? cause(c, 'rear_lock', 'rearLocks') : cause(c, 'lock_up', 'lockUps');
	const atM = c.pair.driver?.peakM ?? null;
	for (const wheel of c.pair.driver?.lockWheels?.split(' ') ?? [])
		named.evidence.push({ quantity: `lock_${wheel}`, unit: '', driver: 1, reference: null, atM, plusMinus: null });
	return named;
}

/** Is full brake known, or only guessed from the run? A guess allows no word about too much. */
export function knowsFullBrake({ pair }: CornerCase): boolean {
	const guessed = (metrics: CornerMetrics | undefined) => metrics?.reasons.peakPct === 'brake_scale_assumed';
	return !guessed(pair.driver) && !guessed(pair.reference);
}

/** A peak over the reference's; that it slows no harder is said where it was measured. */
export function overPeak(c: CornerCase): Cause {
	const named = cause(c, 'peak_over', 'peakPct');
	const { strength } = c;
	if (strength && strength.driverMps2 <= strength.referenceMps2 * NO_HARDER)
		named.evidence.push(strengthEvidence(strength, c.pair.driver?.peakM ?? null));
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
		evidence: [
			{ quantity: 'lateralAcceleration', unit: 'm/s²', driver, reference, atM, plusMinus: null },
			...gripEvidence(c, atM)
		]
	};
}

/** Much less of the run's own grip is used than in the reference lap, on the same radius. */
export function unusedShare(c: CornerCase): Cause | null {
	const { gripShare, cornering } = c;
	if (!gripShare || !cornering) return null;
	if (!(gripShare.driver < LEAST_GRIP_SHARE && gripShare.reference - gripShare.driver > LEAST_GRIP_APART)) return null;
	return unusedGrip(c);
}

/** Share of the run's own grip envelope at that speed, where it is known. */
function gripEvidence({ gripShare }: CornerCase, atM: number): Evidence[] {
	if (!gripShare) return [];
	const [driver, reference] = [100 * gripShare.driver, 100 * gripShare.reference];
	return [{ quantity: 'gripShare', unit: '%', driver, reference, atM, plusMinus: null }];
}

/** Off the throttle after the reference picked it up. */
export function causesOfLatePickUp(c: CornerCase): CauseShare[] {
	const root = rootOfLatePickUp(c);
	if (root) return whole(root);
	const pickUp = differenceOf(c.pair, 'pickUpM');
	const picksUpAlone = pickUp === null && c.place.reference.flat && c.pair.driver?.pickUpM != null;
	if (picksUpAlone && c.pair.driver?.onsetM == null) return whole(extraLift(c));
	if (more(pickUp) || picksUpAlone) return whole(cause(c, 'pick_up_late', 'pickUpM'));
	return whole(more(differenceOf(c.pair, 'coastingS')) ? coasted(c) : slowExit(c));
}

/** A locked wheel, or a brake that is held so long that the pick-up had to wait for it, explains the lateness. */
function rootOfLatePickUp(c: CornerCase): Cause | null {
	const lock = locked(c);
	if (lock) return lock;
	const pickUp = differenceOf(c.pair, 'pickUpM');
	const release = differenceOf(c.pair, 'releaseEndM');
	if (!more(pickUp) || !more(release) || !less(differenceOf(c.pair, 'minKmh'))) return null;
	if (!(release.by >= WAITED_SHARE * pickUp.by)) return null;
	return causesOfSlowing(c, true)[0]?.cause ?? null;
}

/** Opening the throttle: a late pick-up shifts the whole opening; what the opening itself takes longer is the exit's. */
export function causesOfSlowOpening(c: CornerCase): CauseShare[] {
	const pickUp = differenceOf(c.pair, 'pickUpM');
	const [late] = causesOfLatePickUp(c);
	if (!late || !more(pickUp) || late.cause.code !== 'pick_up_late') return late ? [late] : whole(slowExit(c));
	const share = Math.min(shareOfLateness(c, pickUp.by), shareOfShift(c, pickUp.by));
	if (share >= 1 - ONE_CAUSE_SHARE) return [late];
	const exit = slowExit(c);
	return [{ ...late, share }, ...(exit ? [{ cause: exit, share: 1 - share }] : [])];
}

/** How much of the slower exit a pick-up that is late by some metres can explain, by the reference's own acceleration: v² = v₀² + 2·a·s. */
function shareOfLateness({ pair, place }: CornerCase, lateM: number): number {
	const { driver, reference } = pair;
	const { pickUpM } = place.reference;
	if (driver?.exitKmh == null || reference?.exitKmh == null || reference.minKmh === null || pickUpM === null) return 1;
	const openM = place.endM - pickUpM;
	const lost = reference.exitKmh ** 2 - driver.exitKmh ** 2;
	if (!(openM > lateM && lost > 0)) return 1;
	const gainedPerM = (reference.exitKmh ** 2 - reference.minKmh ** 2) / openM;
	return Math.min(1, (LATENESS_ROOM * gainedPerM * lateM) / lost);
}

/** Share of a later full throttle that is the later pick-up's. */
function shareOfShift(c: CornerCase, lateM: number): number {
	const full = differenceOf(c.pair, 'fullThrottleM');
	if (!full) return 1;
	const slower = full.by - lateM;
	return slower > SLOW_OPENING_SHARE * lateM && slower > full.plusMinus ? lateM / full.by : 1;
}

function slowExit(c: CornerCase): Cause | null {
	if (!less(differenceOf(c.pair, 'exitKmh'))) return null;
	if (moreBy(differenceOf(c.pair, 'spinS'), LEAST_SPIN_S)) return cause(c, 'wheelspin', 'spinS', 'exitKmh');
	const scrubs = scrub(c);
	if (scrubs) return scrubs;
	const later = differenceOf(c.pair, 'fullThrottleM');
	const asEarly = !more(differenceOf(c.pair, 'pickUpM')) && c.pair.driver?.pickUpM != null;
	if (asEarly && moreBy(later, LEAST_HESITATION_M)) return cause(c, 'pick_up_hesitant', 'fullThrottleM', 'exitKmh');
	const full = moreBy(differenceOf(c.pair, 'fullThrottleM'), LEAST_TOLD_M) ? (['fullThrottleM'] as const) : [];
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
