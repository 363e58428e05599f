import { differenceOf, evidenceOf, type MetricField } from './difference.ts';
import { overPeak, type Cause, type CornerCase } from './causes.ts';
import type { FindingCode } from '../../schemas/codes.ts';

/**
 * Differences in how the pedals are used that are worth naming even where they cost no time of their own. Smaller ones are
 * the same technique.
 */
const LEAST_PEAK_PCT = 8;
const LEAST_IDLE_GAP_S = 0.3;
const LEAST_HOLD_S = 0.3;
const LEAST_RELEASE_S = 0.25;
const ABRUPT_RELEASE_SHARE = 0.6;
const LONG_RELEASE_SHARE = 1.6;
const LEAST_RISE_S = 0.1;
const QUICK_RISE_SHARE = 0.5;

/**
 * Techniques of the driver in one corner that differ from the reference's, beyond their ± and far enough to be seen.
 *
 * @returns causes without a cost, the most telling first
 */
export function techniquesOf(c: CornerCase): Cause[] {
	const { pair, place } = c;
	const found: Cause[] = [];
	const add = (code: FindingCode, field: MetricField, ...further: MetricField[]) =>
		found.push({ code, field, evidence: [field, ...further].map((f) => evidenceOf(pair, f, place.corner.apexM)) });

	const idle = differenceOf(pair, 'idleGapS');
	if (idle?.counts && idle.by > LEAST_IDLE_GAP_S) add('idle_gap', 'idleGapS');
	const locks = differenceOf(pair, 'lockUps');
	if (locks && locks.by > 0) add('lock_up', 'lockUps');
	const peak = differenceOf(pair, 'peakPct');
	if (peak?.counts && peak.by > LEAST_PEAK_PCT) found.push(overPeak(c));
	if (peak?.counts && peak.by < -LEAST_PEAK_PCT) add('peak_under', 'peakPct');
	const release = differenceOf(pair, 'releaseS');
	if (release?.counts && Math.abs(release.by) > LEAST_RELEASE_S) {
		if (release.driver < ABRUPT_RELEASE_SHARE * release.reference) add('release_abrupt', 'releaseS');
		if (release.driver > LONG_RELEASE_SHARE * release.reference) add('release_long', 'releaseS', 'releaseEndM');
	}
	const holdReference = pair.reference?.lightHoldS ?? 0;
	const holdDriver = pair.driver?.lightHoldS ?? 0;
	if (pair.driver?.onsetM != null && holdReference - holdDriver > LEAST_HOLD_S && holdDriver < holdReference / 2)
		add('hold_missing', 'lightHoldS');
	const dabs = differenceOf(pair, 'dabs');
	if (dabs && dabs.by > 0 && dabs.reference === 0) add('second_dab', 'dabs');
	const rise = differenceOf(pair, 'riseS');
	if (rise?.counts && -rise.by > LEAST_RISE_S && rise.driver < QUICK_RISE_SHARE * rise.reference)
		add('rise_quick', 'riseS');
	return found;
}
