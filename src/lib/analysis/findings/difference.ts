import type { CornerMetrics, Evidence } from '../../schemas/analysisDocument.ts';
import { nearestPlace } from '../compare/cornerPlaces.ts';

/** Metrics of one corner in both laps; a lap without a complete pass has none. */
export interface MetricsPair {
	driver: CornerMetrics | undefined;
	reference: CornerMetrics | undefined;
	/** about which places are unwrapped */
	apexM: number;
	lengthM: number;
}

type NumericField = {
	[F in keyof CornerMetrics]-?: NonNullable<CornerMetrics[F]> extends number ? F : never;
}[keyof CornerMetrics];
export type MetricField = Exclude<NumericField, 'lap' | 'corner' | 'onsetS'>;

interface FieldFacts {
	/** name in the evidence */
	quantity: string;
	unit: string;
	/** ± of one lap's value where the measurement does not state one */
	plusMinus: number;
	/** does it lie along the path */
	place?: true;
}

/** What findings are judged by. Places are never told apart by less than this, the step of the path and the jitter of positions. */
export const FIELD_FACTS: Record<MetricField, FieldFacts> = {
	onsetM: { quantity: 'onset', unit: 'm', plusMinus: 1, place: true },
	peakPct: { quantity: 'peak', unit: '%', plusMinus: 2 },
	peakRawPct: { quantity: 'rawPeak', unit: '%', plusMinus: 2 },
	peakM: { quantity: 'peakPlace', unit: 'm', plusMinus: 2, place: true },
	riseS: { quantity: 'rise', unit: 's', plusMinus: 0.04 },
	releaseStartM: { quantity: 'releaseStart', unit: 'm', plusMinus: 2, place: true },
	releaseEndM: { quantity: 'releaseEnd', unit: 'm', plusMinus: 1.5, place: true },
	releaseS: { quantity: 'release', unit: 's', plusMinus: 0.1 },
	dabs: { quantity: 'dabs', unit: '', plusMinus: 0 },
	lightHoldS: { quantity: 'lightHold', unit: 's', plusMinus: 0.1 },
	trailS: { quantity: 'trail', unit: 's', plusMinus: 0.1 },
	trailM: { quantity: 'trailLength', unit: 'm', plusMinus: 2 },
	turnInM: { quantity: 'turnIn', unit: 'm', plusMinus: 3, place: true },
	entryKmh: { quantity: 'entrySpeed', unit: 'km/h', plusMinus: 0.7 },
	minKmh: { quantity: 'minSpeed', unit: 'km/h', plusMinus: 0.35 },
	minSpeedM: { quantity: 'minSpeedPlace', unit: 'm', plusMinus: 3, place: true },
	liftM: { quantity: 'lift', unit: 'm', plusMinus: 1.5, place: true },
	smallestOpeningPct: { quantity: 'smallestOpening', unit: '%', plusMinus: 3 },
	smallestOpeningM: { quantity: 'smallestOpeningPlace', unit: 'm', plusMinus: 3, place: true },
	pickUpM: { quantity: 'pickUp', unit: 'm', plusMinus: 1, place: true },
	fullThrottleM: { quantity: 'fullThrottle', unit: 'm', plusMinus: 2, place: true },
	secondLiftS: { quantity: 'secondLift', unit: 's', plusMinus: 0.1 },
	overlapS: { quantity: 'overlap', unit: 's', plusMinus: 0.05 },
	coastingS: { quantity: 'coasting', unit: 's', plusMinus: 0.05 },
	exitKmh: { quantity: 'exitSpeed', unit: 'km/h', plusMinus: 0.7 },
	idleGapS: { quantity: 'idleGap', unit: 's', plusMinus: 0.1 },
	lockUps: { quantity: 'lockUps', unit: '', plusMinus: 0 },
	timeS: { quantity: 'cornerTime', unit: 's', plusMinus: 0.002 },
	coastBeforeS: { quantity: 'coastBefore', unit: 's', plusMinus: 0.05 },
	coastBetweenS: { quantity: 'coastBetween', unit: 's', plusMinus: 0.05 },
	coastAfterS: { quantity: 'coastAfter', unit: 's', plusMinus: 0.05 },
	holdPct: { quantity: 'holdLevel', unit: '%', plusMinus: 1 },
	brakedMps2: { quantity: 'deceleration', unit: 'm/s²', plusMinus: 0.15 },
	spinS: { quantity: 'wheelspin', unit: 's', plusMinus: 0.1 },
	steerCorrections: { quantity: 'corrections', unit: '', plusMinus: 0 },
	rearLocks: { quantity: 'rearLocks', unit: '', plusMinus: 0 }
};

/** One metric of both laps. */
export interface Difference {
	field: MetricField;
	driver: number;
	reference: number;
	/** driver − reference; places the short way round the lap */
	by: number;
	/** ± of `by` */
	plusMinus: number;
	/** is it outside its ± */
	counts: boolean;
}

/**
 * Difference of one metric between driver and reference with its ±: both laps' own ± added in quadrature.
 *
 * @returns null where either lap has no value
 */
export function differenceOf(pair: MetricsPair, field: MetricField): Difference | null {
	const driver = pair.driver?.[field] ?? null;
	const reference = pair.reference?.[field] ?? null;
	if (driver === null || reference === null) return null;
	const facts = FIELD_FACTS[field];
	const plusMinusOf = (metrics: CornerMetrics | undefined): number => {
		const own = metrics?.plusMinus[field];
		if (own === undefined) return facts.plusMinus;
		// a speed states all of its ±; elsewhere the step of the path, or of a pedal, is left
		return facts.unit === 'km/h' ? own : Math.max(own, facts.plusMinus);
	};
	const plusMinus = Math.hypot(plusMinusOf(pair.driver), plusMinusOf(pair.reference));
	const by = facts.place ? nearestPlace(0, driver - reference, pair.lengthM) : driver - reference;
	return { field, driver, reference, by, plusMinus, counts: Math.abs(by) > plusMinus };
}

/** The metric as evidence; where one lap has no value its side is null. */
export function evidenceOf(pair: MetricsPair, field: MetricField, atM: number | null): Evidence {
	const { quantity, unit, place } = FIELD_FACTS[field];
	// both on the corner's side of the line, so that a sentence may subtract them
	const value = (metrics: CornerMetrics | undefined): number | null => {
		const known = metrics?.[field] ?? null;
		return place && known !== null ? nearestPlace(pair.apexM, known, pair.lengthM) : known;
	};
	const driver = value(pair.driver);
	const reference = value(pair.reference);
	return {
		quantity,
		unit,
		driver,
		reference,
		atM: place ? (driver ?? reference ?? atM) : atM,
		plusMinus: differenceOf(pair, field)?.plusMinus ?? null
	};
}
