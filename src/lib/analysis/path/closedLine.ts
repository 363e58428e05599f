import type { Channels } from '../model.ts';
import { curvatureOf, fitEvenLine } from './evenLine.ts';
import type { EvenLine } from './evenLine.ts';
import type { Positions } from './freshPositions.ts';
import { geometryOfLine } from './pathGeometry.ts';
import { trackOnPath } from './trackOnPath.ts';
import { wayAlong, wayAt } from './wayAlong.ts';

/** A stretch of the run between two crossings. */
export interface Stretch {
	startS: number;
	endS: number;
}

/**
 * How much a path's sharpness changes from metre to metre, as the variance of the third derivative, 1/m⁴. With a position noise σ a
 * smoothing of σ²/q balances noise against corners that are cut: 0.3 m at 60 Hz leaves 25 m of detail. Four times more lets noise
 * grow corners of its own, four times less rounds hairpins off.
 */
const SHARPNESS_VARIANCE = 4e-6;
/**
 * Least smoothing, in squared metres of position error that count as nothing: leaves about 10 m of detail at 50 Hz. Lower it and
 * steering corrections on a straight show up as bends.
 */
export const LEAST_SMOOTHING = 50;
/** Lap ends are blended over this way before and behind the line, because the line is not crossed at the same place across. */
const BLEND_M = 60;
/** With less way than this beyond the lap's ends the gap is closed by a slow drift over the whole lap. */
const LEAST_BLEND_M = 5;

/** Smoothing for positions of this noise, see `smoothScattered`. */
export function smoothingFor(noiseM: number): number {
	return Math.max(LEAST_SMOOTHING, (noiseM * noiseM) / SHARPNESS_VARIANCE);
}

/**
 * The closed line that one or several laps drove, from line to line. The first lap gives the shape; all of them are then laid on it
 * and averaged, each with a weight that fades over the lap's ends.
 *
 * @param laps at least one; the first is the one to stand on
 */
export function closedLine(positions: Positions, channels: Channels, laps: Stretch[]): EvenLine {
	const lambda = smoothingFor(positions.noiseM);
	const way = wayAlong(positions, channels);
	const first = lapPoints(positions, channels, way, laps[0]);
	let line = fitEvenLine({ ...first, closed: true }, lambda);
	// twice: places along the first fit are as good as the way driven, along the second as good as the line
	for (let pass = 0; pass < 2; pass++) {
		const points = laps.map((lap, k) => (k === 0 ? first : lapPoints(positions, channels, way, lap)));
		line = refit(line, points, positions, channels, lambda);
	}
	return line;
}

interface LapPoints {
	/** indices into the positions */
	from: number;
	to: number;
	atM: Float64Array;
	xM: Float64Array;
	yM: Float64Array;
	weights: Float64Array;
	lengthM: number;
}

/** Positions of a lap with what it drove before and behind it, by way from its start. */
function lapPoints(positions: Positions, channels: Channels, way: Float64Array, lap: Stretch): LapPoints {
	const { sample, xM, yM } = positions;
	const startM = wayAt(positions, channels, way, lap.startS);
	const endM = wayAt(positions, channels, way, lap.endS);
	const lengthM = endM - startM;
	const inside = (j: number, reach: number) => way[j] >= startM - reach && way[j] <= endM + reach;
	const reach = Math.min(BLEND_M, lengthM / 8);
	let from = 0;
	while (from < sample.length && way[from] < startM - reach) from++;
	let to = from;
	while (to + 1 < sample.length && inside(to + 1, reach)) to++;
	const blend = Math.min(startM - way[from], way[to] - endM, reach);
	const drift = blend < LEAST_BLEND_M;
	if (drift) {
		while (way[from] < startM - 1e-6) from++;
		while (way[to] > endM + 1e-6) to--;
	}
	const count = to - from + 1;
	const points: LapPoints = {
		from,
		to,
		atM: new Float64Array(count),
		xM: xM.slice(from, to + 1),
		yM: yM.slice(from, to + 1),
		weights: new Float64Array(count).fill(1),
		lengthM
	};
	const gapX = drift ? xM[to] - xM[from] : 0;
	const gapY = drift ? yM[to] - yM[from] : 0;
	// of the gap only what lies across counts; along it is the way between the last and the first position
	const [acrossX, acrossY] = drift ? across(gapX, gapY, xM[from + 1] - xM[from], yM[from + 1] - yM[from]) : [0, 0];
	for (let k = 0; k < count; k++) {
		const at = way[from + k] - startM;
		points.atM[k] = at;
		if (drift) {
			const share = at / lengthM - 0.5;
			points.xM[k] -= acrossX * share;
			points.yM[k] -= acrossY * share;
		} else points.weights[k] = fade(at, blend) - fade(at - lengthM, blend);
	}
	return points;
}

/** 0 before −blend, 1 behind +blend, smooth between. */
function fade(at: number, blend: number): number {
	const share = Math.min(Math.max((at + blend) / (2 * blend), 0), 1);
	return share * share * (3 - 2 * share);
}

function across(x: number, y: number, alongX: number, alongY: number): [number, number] {
	const size = Math.hypot(alongX, alongY) || 1;
	const along = (x * alongX + y * alongY) / size;
	return [x - (along * alongX) / size, y - (along * alongY) / size];
}

/** Lays laps on a line and fits it anew. */
function refit(line: EvenLine, laps: LapPoints[], positions: Positions, channels: Channels, lambda: number): EvenLine {
	const geometry = geometryOfLine(line, curvatureOf(line));
	const at: number[] = [];
	const x: number[] = [];
	const y: number[] = [];
	const weights: number[] = [];
	for (const lap of laps) {
		const own: Positions = {
			...positions,
			sample: positions.sample.subarray(lap.from, lap.to + 1),
			xM: lap.xM,
			yM: lap.yM
		};
		const tracked = trackOnPath(own, channels, geometry);
		for (let k = 0; k < lap.atM.length; k++) {
			if (Number.isNaN(tracked.placeM[k])) continue;
			at.push(tracked.placeM[k]);
			x.push(lap.xM[k]);
			y.push(lap.yM[k]);
			weights.push(lap.weights[k]);
		}
	}
	return fitEvenLine(
		{
			atM: Float64Array.from(at),
			xM: Float64Array.from(x),
			yM: Float64Array.from(y),
			weights: Float64Array.from(weights),
			lengthM: line.lengthM,
			closed: true
		},
		lambda
	);
}
