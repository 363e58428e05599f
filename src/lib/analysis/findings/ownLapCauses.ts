import { medianSorted, sampleStandardDeviation } from 'simple-statistics';
import type { CornerMetrics, Evidence } from '../../schemas/analysisDocument.ts';
import { nearestPlace } from '../compare/cornerPlaces.ts';
import { knowsFullBrake, type Cause, type CornerCase } from './causes.ts';
import { FIELD_FACTS, type MetricField } from './difference.ts';

/** Laps in which a harder braking must have brought nothing. */
export const LEAST_HARDER_LAPS = 3;
export const LEAST_HARDER_PCT = 8;
/** Deceleration up to this share of the reference's is no more. */
const NO_MORE = 1.01;
/** Arrival speeds within this share are the same: downforce and drag change with speed. */
const SAME_SPEED = 0.03;
/** Laps from which a spread is said. */
export const LEAST_SPREAD_LAPS = 5;
/** Standard deviations that are worth a word, and how many ± they must be. */
export const WIDE_ONSET_M = 5;
export const WIDE_MINIMUM_KMH = 2.5;
const CLEAR_OF_PLUS_MINUS = 2;

/**
 * Harder brings no more: in several clean laps the peak is above the reference's, and at the same arrival speed the car slows no harder
 * (tyre limit, a system, fade or falling downforce).
 */
export function harderNoGain(c: CornerCase): Cause | null {
	const { driver, reference } = c.pair;
	if (!knowsFullBrake(c) || reference?.peakPct == null || reference.brakedMps2 == null) return null;
	const { peakPct, brakedMps2, entryKmh } = reference;
	const isHarder = (lap: CornerMetrics | undefined) =>
		lap?.peakPct != null && lap.brakedMps2 != null && lap.peakPct - peakPct > LEAST_HARDER_PCT;
	if (!isHarder(driver)) return null;
	const sameSpeed = ({ entryKmh: own }: CornerMetrics) =>
		own === null || entryKmh === null || Math.abs(own / entryKmh - 1) < SAME_SPEED;
	const harder = c.ownLaps.filter((lap) => isHarder(lap) && sameSpeed(lap));
	if (harder.length < LEAST_HARDER_LAPS) return null;
	const median = (field: 'peakPct' | 'brakedMps2') =>
		medianSorted(harder.map((lap) => lap[field] ?? 0).sort((a, b) => a - b));
	if (!(median('brakedMps2') <= NO_MORE * brakedMps2)) return null;
	const atM = driver?.peakM ?? null;
	return {
		code: 'harder_no_gain',
		field: 'peakPct',
		evidence: [
			{ quantity: 'peak', unit: '%', driver: median('peakPct'), reference: peakPct, atM, plusMinus: null },
			{
				quantity: 'deceleration',
				unit: 'm/s²',
				driver: median('brakedMps2'),
				reference: brakedMps2,
				atM,
				plusMinus: null
			},
			{ quantity: 'laps', unit: '', driver: harder.length, reference: null, atM, plusMinus: null }
		]
	};
}

/** Onset and minimum speed that differ from lap to lap by more than a coach can build on. */
export function spreads(c: CornerCase): Cause[] {
	const found: Cause[] = [];
	const onset = spreadOf(c, 'onsetM');
	if (onset && (onset.driver ?? 0) > WIDE_ONSET_M) found.push({ code: 'spread_onset', field: null, evidence: [onset] });
	const minimum = spreadOf(c, 'minKmh');
	if (minimum && (minimum.driver ?? 0) > WIDE_MINIMUM_KMH)
		found.push({ code: 'spread_min_speed', field: null, evidence: [minimum] });
	return found;
}

function spreadOf({ ownLaps, pair, place }: CornerCase, field: MetricField): Evidence | null {
	const { unit, quantity, plusMinus, place: isPlace } = FIELD_FACTS[field];
	const held = ownLaps.filter((lap) => lap[field] != null);
	if (held.length < LEAST_SPREAD_LAPS) return null;
	const values = held.map((lap) =>
		isPlace ? nearestPlace(pair.apexM, lap[field] ?? 0, pair.lengthM) : (lap[field] ?? 0)
	);
	const deviation = sampleStandardDeviation(values);
	const uncertain = Math.max(plusMinus, ...held.map((lap) => lap.plusMinus[field] ?? 0));
	if (!(deviation > CLEAR_OF_PLUS_MINUS * uncertain)) return null;
	return {
		quantity: `${quantity}Spread`,
		unit,
		driver: deviation,
		reference: null,
		atM: isPlace ? medianSorted([...values].sort((a, b) => a - b)) : place.corner.apexM,
		plusMinus: deviation / Math.sqrt(2 * (held.length - 1))
	};
}
