import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import { MEASURED_KINDS, type MeasuredTargetKind } from './targetKinds.ts';

export interface Measured {
	value: number;
	plusMinus: number;
}

/**
 * What one pass of a corner says about a kind.
 *
 * @returns null where it is not known, or did not happen (a corner without a brake has no onset)
 */
export function readMetric(kind: MeasuredTargetKind, metrics: CornerMetrics): Measured | null {
	const { field } = MEASURED_KINDS[kind];
	const value = metrics[field];
	if (value !== null && value !== undefined) return { value: Number(value), plusMinus: metrics.plusMinus[field] ?? 0 };
	// No second lift is written as nothing where there is a throttle to lift.
	return kind === 'no_second_lift' && metrics.pickUpM !== null ? { value: 0, plusMinus: 0 } : null;
}

/** Difference of two places of a lap by the short way round, so that 3,998 m and 2 m of 4,000 m are 4 m apart. */
export function shortWay(differenceM: number, lengthM: number): number {
	return differenceM - lengthM * Math.round(differenceM / lengthM);
}

/** Values on one side of the line where they are places; others as they are. */
export function onOneSide(values: readonly number[], kind: MeasuredTargetKind, lengthM: number): number[] {
	if (!MEASURED_KINDS[kind].isPlace || values.length === 0) return [...values];
	return values.map((value) => values[0] + shortWay(value - values[0], lengthM));
}
