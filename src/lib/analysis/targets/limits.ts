import { sampleStandardDeviation } from 'simple-statistics';
import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { Target } from '../../schemas/target.ts';
import { median } from '../stats/quantile.ts';
import { onOneSide, readMetric } from './readMetric.ts';
import { isMeasured, isSpread, SPREAD_KINDS } from './targetKinds.ts';

/** What the limits and the usual corner time are counted from. */
export interface TargetBases {
	/** the driver's clean passes before the target was set */
	own: readonly CornerMetrics[];
	ownLapTimesS?: readonly number[];
	/** the reference's pass */
	reference: CornerMetrics | null;
	referenceLapTimeS?: number | null;
}

export interface Limits {
	least: number;
	most: number;
}

/** Fewer passes than this have no spread to speak of. */
export const LEAST_FOR_SPREAD = 4;
/** A throttle that dips for less is no second lift. */
const LEAST_SECOND_LIFT_S = 0.05;

/** Limits in the unit of the target's kind; null where what they are counted from is not known. */
export function limitsOf(target: Target, bases: TargetBases, lengthM: number): Limits | null {
	if (target.kind === 'one_application' || target.kind === 'no_lock_up') return { least: -Infinity, most: 0 };
	if (target.kind === 'no_second_lift') return { least: -Infinity, most: LEAST_SECOND_LIFT_S };
	const base = target.base === 'value' ? 0 : baseOf(target, bases, lengthM);
	if (base === null) return null;
	return {
		least: target.least === null ? -Infinity : base + target.least,
		most: target.most === null ? Infinity : base + target.most
	};
}

function baseOf({ kind, base }: Target, bases: TargetBases, lengthM: number): number | null {
	if (kind === 'lap_time') {
		return base === 'own_median' ? medianOf(bases.ownLapTimesS ?? []) : (bases.referenceLapTimeS ?? null);
	}
	if (isSpread(kind)) {
		// One pass of a reference has no spread.
		return base === 'own_median' ? spreadOf(bases.own, SPREAD_KINDS[kind], lengthM) : null;
	}
	if (!isMeasured(kind)) return null;
	if (base === 'reference') return bases.reference && (readMetric(kind, bases.reference)?.value ?? null);
	const values = bases.own.flatMap((metrics) => readMetric(kind, metrics)?.value ?? []);
	return medianOf(onOneSide(values, kind, lengthM));
}

/** Sample standard deviation of one value over passes; null where there are too few. */
export function spreadOf(
	passes: readonly CornerMetrics[],
	kind: Parameters<typeof readMetric>[0],
	lengthM: number
): number | null {
	const values = passes.flatMap((metrics) => readMetric(kind, metrics)?.value ?? []);
	return values.length < LEAST_FOR_SPREAD ? null : sampleStandardDeviation(onOneSide(values, kind, lengthM));
}

/** Median of what is known; null where nothing is. */
export function medianOf(values: ReadonlyArray<number | null>): number | null {
	const middle = median(values.map((value) => value ?? NaN));
	return Number.isFinite(middle) ? middle : null;
}
