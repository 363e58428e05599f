import type { Corner, CornerMetrics } from '../../schemas/analysisDocument.ts';
import { medianSorted } from 'simple-statistics';
import { nearestPlace } from './cornerPlaces.ts';

/**
 * Where laps usually begin to brake, or lift, for each corner: the median over laps, which fixes the borders of cells.
 *
 * @param laps numbers of the laps that count
 * @returns place by corner number, unwrapped about the apex; corners that nobody slows down for are absent
 */
export function usualOnsets(
	metrics: readonly CornerMetrics[],
	corners: readonly Corner[],
	laps: readonly number[],
	lengthM: number
): Map<number, number> {
	const counted = new Set(laps);
	const usual = new Map<number, number>();
	for (const { number, apexM } of corners) {
		if (number === null) continue;
		const onsets: number[] = [];
		for (const { corner, lap, onsetM, liftM } of metrics) {
			if (corner !== number || !counted.has(lap)) continue;
			const places = [onsetM, liftM].filter((place) => place !== null);
			if (places.length) onsets.push(Math.min(...places.map((place) => nearestPlace(apexM, place, lengthM))));
		}
		if (onsets.length) usual.set(number, medianSorted(onsets.sort((a, b) => a - b)));
	}
	return usual;
}
