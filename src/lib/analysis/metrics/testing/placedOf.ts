import type { Corner } from '../../../schemas/analysisDocument.ts';
import type { Lap, PlacedRun } from '../../model.ts';
import { channelsOf, type MadeUpColumns } from './channelsOf.ts';
import { knotValue } from './closedForm.ts';

/** A made-up run from courses of corner points (time, value), straight between them. */
export interface MadeUpRun {
	lengthS: number;
	rateHz: number;
	/** share of a sampling interval by which sampling starts late */
	phase?: number;
	speedKmh: [number, number][];
	brakePct?: [number, number][] | null;
	throttlePct?: [number, number][] | null;
	curvaturePerM?: [number, number][];
	/** added to each brake value */
	brakeNoise?: () => number;
	/** added to each speed */
	speedNoise?: () => number;
	columns?: Partial<MadeUpColumns>;
}

/** Place along a piecewise straight course of speed, exactly. */
export function placeOnCourse(speedKmh: [number, number][], atS: number): number {
	let place = 0;
	let from = 0;
	const ends = [...speedKmh.map(([t]) => t).filter((t) => t > 0 && t < atS), atS];
	for (const to of ends) {
		place += ((knotValue(speedKmh, from) + knotValue(speedKmh, to)) / 7.2) * (to - from);
		from = to;
	}
	return place;
}

/** A one-lap run on an open path of the same length; places and times are those of the courses. */
export function placedOf(run: MadeUpRun): PlacedRun {
	const { lengthS, rateHz, phase = 0, brakePct = null, throttlePct = null } = run;
	const timeS = Array.from({ length: Math.floor(lengthS * rateHz - phase) + 1 }, (_, k) => (k + phase) / rateHz);
	const course = (knots: [number, number][] | null, noise?: () => number) =>
		knots && timeS.map((t) => Math.max(0, knotValue(knots, t) + (noise?.() ?? 0)));
	const placeM = Float64Array.from(timeS, (t) => placeOnCourse(run.speedKmh, t));
	const channels = channelsOf({
		timeS,
		speedKmh: course(run.speedKmh, run.speedNoise) ?? [],
		distanceM: placeM,
		brakePct: course(brakePct, run.brakeNoise),
		throttlePct: course(throttlePct),
		...run.columns
	});
	const lap: Lap = {
		number: 1,
		kind: 'timed',
		startS: timeS[0],
		endS: timeS[timeS.length - 1],
		lengthM: placeM[placeM.length - 1],
		clean: true,
		reasons: [],
		plusMinusS: 0,
		turn: 0
	};
	return {
		channels,
		placeM,
		offsetM: null,
		curvaturePerM: run.curvaturePerM
			? Float64Array.from(timeS, (t) => knotValue(run.curvaturePerM ?? [[0, 0]], t))
			: null,
		laps: [lap],
		path: {
			lengthM: placeM[placeM.length - 1],
			closed: false,
			xM: new Float64Array(0),
			yM: new Float64Array(0),
			curvaturePerM: new Float64Array(0),
			origin: 'positions',
			line: 'mark',
			speedKmh: new Float64Array(0),
			frame: null
		}
	};
}

/** A left-hand corner between three places. */
export function cornerAt(startM: number, apexM: number, endM: number, more: Partial<Corner> = {}): Corner {
	return {
		number: 1,
		startM,
		apexM,
		apex2M: null,
		endM,
		direction: 'left',
		minRadiusM: 50,
		angleDeg: 90,
		linkedTo: null,
		kind: 'braked',
		...more
	};
}
