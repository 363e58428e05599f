import { medianSorted, sampleStandardDeviation } from 'simple-statistics';
import type { Cell, Corner, CornerMetrics } from '../../schemas/analysisDocument.ts';
import { nearestPlace } from './cornerPlaces.ts';

/** The driver's own best in one cell beside what is normal: "you have already done this". */
export interface OwnBest {
	corners: number[];
	bestS: number;
	/** lap of the best */
	lap: number;
	medianS: number;
	/** clean laps with a time for the cell */
	laps: number;
}

/** Fewer laps have no normal. */
const LEAST_LAPS = 3;

/**
 * Best and median of each cell over the clean laps.
 *
 * @param cellS one row for each lap, as `cellTimes` gives them
 * @param laps  the lap of each row
 * @returns cells that at least three clean laps have a time for
 */
export function ownBest(
	cells: readonly Cell[],
	cellS: readonly (readonly (number | null)[])[],
	laps: readonly { number: number; clean: boolean }[]
): OwnBest[] {
	return cells.flatMap(({ corners }, cell) => {
		const times = laps.flatMap(({ number, clean }, i) => {
			const timeS = cellS[i][cell];
			return clean && timeS !== null ? [{ number, timeS }] : [];
		});
		if (times.length < LEAST_LAPS) return [];
		times.sort((a, b) => a.timeS - b.timeS);
		const medianS = medianSorted(times.map(({ timeS }) => timeS));
		return [{ corners, bestS: times[0].timeS, lap: times[0].number, medianS, laps: times.length }];
	});
}

/** How much one corner differs from clean lap to clean lap: standard deviations (n − 1); null under three values. */
export interface CornerSpread {
	corner: number;
	onsetSdM: number | null;
	minSpeedSdKmh: number | null;
	timeSdS: number | null;
	laps: number;
}

/** Spreads of onset, minimum speed and time for each numbered corner over the clean laps. */
export function cornerSpread(
	corners: readonly Corner[],
	metrics: readonly CornerMetrics[],
	cleanLaps: readonly number[],
	lengthM: number
): CornerSpread[] {
	const clean = new Set(cleanLaps);
	return corners.flatMap(({ number, apexM }) => {
		if (number === null) return [];
		const own = metrics.filter((m) => m.corner === number && clean.has(m.lap));
		const deviation = (values: (number | null)[]): number | null => {
			const known = values.filter((value) => value !== null);
			return known.length < LEAST_LAPS ? null : sampleStandardDeviation(known);
		};
		return [
			{
				corner: number,
				onsetSdM: deviation(own.map(({ onsetM }) => (onsetM === null ? null : nearestPlace(apexM, onsetM, lengthM)))),
				minSpeedSdKmh: deviation(own.map(({ minKmh }) => minKmh)),
				timeSdS: deviation(own.map(({ timeS }) => timeS)),
				laps: own.length
			}
		];
	});
}
