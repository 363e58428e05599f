import type { Corner, CornerMetrics } from '../../schemas/analysisDocument.ts';

/** The places of one lap in one corner, unwrapped about the corner's apex so that they grow in the driving direction. */
export interface LapPlaces {
	liftM: number | null;
	onsetM: number | null;
	releaseStartM: number | null;
	releaseEndM: number | null;
	turnInM: number | null;
	minSpeedM: number | null;
	pickUpM: number | null;
	fullThrottleM: number | null;
	/** taken at full throttle, without a lift */
	flat: boolean;
}

/** A numbered corner with its places unwrapped about its apex, which lies in [0, lengthM). */
export interface CornerPlaces {
	corner: Corner;
	number: number;
	startM: number;
	apexM: number;
	endM: number;
	driver: LapPlaces;
	reference: LapPlaces;
}

/**
 * The representative of a place on the closed path that lies nearest to another.
 *
 * @example nearestPlace(5, 2190, 2200) // => -10
 */
export function nearestPlace(aboutM: number, placeM: number, lengthM: number): number {
	return placeM - lengthM * Math.round((placeM - aboutM) / lengthM);
}

function lapPlaces(metrics: CornerMetrics | undefined, aboutM: number, lengthM: number): LapPlaces {
	const place = (field: Exclude<keyof LapPlaces, 'flat'>): number | null => {
		const value = metrics?.[field] ?? null;
		return value === null ? null : nearestPlace(aboutM, value, lengthM);
	};
	return {
		liftM: place('liftM'),
		onsetM: place('onsetM'),
		releaseStartM: place('releaseStartM'),
		releaseEndM: place('releaseEndM'),
		turnInM: place('turnInM'),
		minSpeedM: place('minSpeedM'),
		pickUpM: place('pickUpM'),
		fullThrottleM: place('fullThrottleM'),
		flat: metrics?.reasons.pickUpM === 'flat'
	};
}

/**
 * The numbered corners in driving order with both laps' places, all unwrapped: a corner that the line cuts starts below 0 or
 * ends beyond the lap's length.
 */
export function cornerPlaces(
	corners: readonly Corner[],
	lengthM: number,
	driver: readonly CornerMetrics[],
	reference: readonly CornerMetrics[]
): CornerPlaces[] {
	const places: CornerPlaces[] = [];
	for (const corner of corners) {
		const { number } = corner;
		if (number === null) continue;
		const apexM = ((corner.apexM % lengthM) + lengthM) % lengthM;
		const of = (metrics: readonly CornerMetrics[]) => metrics.find((m) => m.corner === number);
		places.push({
			corner,
			number,
			apexM,
			startM: nearestPlace(apexM, corner.startM, lengthM),
			endM: nearestPlace(apexM, corner.endM, lengthM),
			driver: lapPlaces(of(driver), apexM, lengthM),
			reference: lapPlaces(of(reference), apexM, lengthM)
		});
	}
	return places.sort((a, b) => a.apexM - b.apexM);
}
