import type { FindingCode } from '../../schemas/codes.ts';
import { knowsFullBrake, LEAST_SPIN_S, locked, overPeak, unusedShare, type Cause, type CornerCase } from './causes.ts';
import { differenceOf, evidenceOf, type MetricField } from './difference.ts';
import { otherGear, shortShift } from './gears.ts';
import { harderNoGain, spreads } from './ownLapCauses.ts';
import { scrub } from './scrub.ts';

/**
 * Differences in technique that are worth naming even where they cost no time of their own. Smaller ones are the same technique.
 */
export const LEAST_PEAK_PCT = 8;
export const LEAST_IDLE_GAP_S = 0.3;
export const LEAST_HOLD_S = 0.3;
export const LEAST_RELEASE_S = 0.25;
export const ABRUPT_RELEASE_SHARE = 0.6;
export const LONG_RELEASE_SHARE = 1.6;
export const LEAST_RISE_S = 0.1;
export const QUICK_RISE_SHARE = 0.5;
export const LEAST_OVERLAP_S = 0.2;
/** A change of feet takes at most this long; more is coasting. */
export const LEAST_CHANGE_S = 0.1;
export const LONGEST_CHANGE_S = 0.5;
export const LEAST_TURN_IN_M = 6;
export const LEAST_CORRECTIONS = 2;
/** Above this a hold is no light one. */
export const LIGHT_HOLD_PCT = 12;

type Add = (code: FindingCode, field: MetricField, ...further: MetricField[]) => void;

/**
 * Techniques of the driver in one corner that differ from the reference's, beyond their ± and far enough to be seen.
 *
 * @returns causes without a cost, the most telling first
 */
export function techniquesOf(c: CornerCase): Cause[] {
	const { pair, place } = c;
	const found: Cause[] = [];
	const add: Add = (code, field, ...further) => {
		found.push({ code, field, evidence: [field, ...further].map((f) => evidenceOf(pair, f, place.corner.apexM)) });
	};
	const push = (cause: Cause | null) => {
		if (cause) found.push(cause);
	};
	const by = (field: MetricField): number => {
		const difference = differenceOf(pair, field);
		return difference?.counts ? difference.by : 0;
	};

	if (by('idleGapS') > LEAST_IDLE_GAP_S) add('idle_gap', 'idleGapS');
	push(locked(c));
	addBraking(c, by, add, push);
	addHold(c, add);
	if (by('turnInM') < -LEAST_TURN_IN_M) add('turn_in_early', 'turnInM');
	if (by('turnInM') > LEAST_TURN_IN_M) add('turn_in_late', 'turnInM');
	if (by('overlapS') > LEAST_OVERLAP_S) add('pedal_overlap', 'overlapS');
	if (by('spinS') > LEAST_SPIN_S) add('wheelspin', 'spinS');
	push(scrub(c));
	if (by('steerCorrections') >= LEAST_CORRECTIONS) add('steering_corrections', 'steerCorrections');
	push(unusedShare(c));
	push(otherGear(c));
	push(shortShift(c));
	found.push(...spreads(c));
	return found;
}

function addBraking(
	c: CornerCase,
	by: (field: MetricField) => number,
	add: Add,
	push: (cause: Cause | null) => void
): void {
	const { pair } = c;
	const noGain = harderNoGain(c);
	push(noGain);
	if (!noGain && by('peakPct') > LEAST_PEAK_PCT && knowsFullBrake(c)) push(overPeak(c));
	if (by('peakPct') < -LEAST_PEAK_PCT) add('peak_under', 'peakPct');
	const release = differenceOf(pair, 'releaseS');
	if (release?.counts && Math.abs(release.by) > LEAST_RELEASE_S) {
		if (release.driver < ABRUPT_RELEASE_SHARE * release.reference) add('release_abrupt', 'releaseS');
		if (release.driver > LONG_RELEASE_SHARE * release.reference) add('release_long', 'releaseS', 'releaseEndM');
	}
	if (pair.driver?.releaseProgressive === false && pair.reference?.releaseProgressive)
		add('release_uneven', 'releaseS');
	const dabs = differenceOf(pair, 'dabs');
	if (dabs && dabs.by > 0 && dabs.reference === 0) add('second_dab', 'dabs');
	const rise = differenceOf(pair, 'riseS');
	if (rise?.counts && -rise.by > LEAST_RISE_S && rise.driver < QUICK_RISE_SHARE * rise.reference)
		add('rise_quick', 'riseS');
	const changes = by('coastBeforeS');
	if (changes > LEAST_CHANGE_S && (pair.driver?.coastBeforeS ?? 0) <= LONGEST_CHANGE_S)
		add('pedal_change_slow', 'coastBeforeS');
}

/** The light hold of a braking that the reference holds lightly: missing, too short, or too strong to be one. */
function addHold({ pair }: CornerCase, add: Add): void {
	const reference = pair.reference?.lightHoldS ?? 0;
	const driver = pair.driver?.lightHoldS ?? 0;
	if (pair.driver?.onsetM == null || !(reference - driver > LEAST_HOLD_S && driver < reference / 2)) return;
	if ((pair.driver.holdPct ?? 0) > LIGHT_HOLD_PCT) add('hold_strong', 'holdPct', 'lightHoldS');
	else add(driver > 0 ? 'hold_short' : 'hold_missing', 'lightHoldS');
}
