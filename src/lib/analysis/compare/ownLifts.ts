import type { Corner, CornerMetrics } from '../../schemas/analysisDocument.ts';
import { KMH_PER_MPS } from '../../units.ts';
import { nearestPlace } from './cornerPlaces.ts';

/** A throttle that is closed for less than this and fully open again has changed gear. */
const GEAR_CHANGE_S = 0.35;
/** Lifts nearer together than this are one. */
const SAME_LIFT_M = 1;

/**
 * Metrics of one lap in which a corner that is not braked for keeps only a lift of its own: not one that belongs to the braking for the
 * next corner, and not the car's own throttle cut at a gear change. Without its lift such a corner is flat.
 *
 * @param metrics of one lap; not modified
 */
export function ownLifts(
	metrics: readonly CornerMetrics[],
	corners: readonly Corner[],
	lengthM: number
): CornerMetrics[] {
	const numbers = corners.flatMap(({ number }) => (number === null ? [] : [number]));
	return metrics.map((own) => {
		const { liftM, onsetM } = own;
		if (liftM === null || onsetM !== null) return own;
		const next = metrics.find((m) => m.corner === numbers[numbers.indexOf(own.corner) + 1]);
		const begins = [next?.liftM ?? null, next?.onsetM ?? null].filter((place) => place !== null);
		const borrowed = begins.some((place) => nearestPlace(0, place - liftM, lengthM) < SAME_LIFT_M);
		return borrowed || isGearChange(own, liftM) ? flatCorner(own) : own;
	});
}

function isGearChange({ fullThrottleM, minKmh, reasons }: CornerMetrics, liftM: number): boolean {
	if (reasons.pickUpM !== 'partly_lifted' || fullThrottleM === null || minKmh === null) return false;
	return fullThrottleM >= liftM && ((fullThrottleM - liftM) / minKmh) * KMH_PER_MPS < GEAR_CHANGE_S;
}

function flatCorner(own: CornerMetrics): CornerMetrics {
	return { ...own, liftM: null, pickUpM: null, fullThrottleM: null, reasons: { ...own.reasons, pickUpM: 'flat' } };
}
