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
/** Time before and behind a lap in which that way is looked for. */
const MARGIN_S = 15;
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
	const points = laps.map((lap) => lapPoints(positions, channels, lap));
	let line = fitEvenLine({ ...points[0], closed: true }, lambda);
	// twice: places along the first fit are as good as the way driven, along the second as good as the line
	for (let pass = 0; pass < 2; pass++) line = refit(line, points, channels, lambda);
	return line;
}

/** A lap's positions with what it drove before and behind it. */
interface LapPoints extends Positions {
	/** way from the lap's start, m; negative before it */
	atM: Float64Array;
	weights: Float64Array;
	lengthM: number;
}

/** Positions of a lap with what it drove before and behind it, by way from its start. */
function lapPoints(positions: Positions, channels: Channels, lap: Stretch): LapPoints {
	const around = within(positions, channels, lap, MARGIN_S);
	const { sample } = around;
	const way = wayAlong(around, channels);
	const startM = wayAt(around, channels, way, lap.startS);
	const endM = wayAt(around, channels, way, lap.endS);
	const lengthM = endM - startM;
	const reach = Math.min(BLEND_M, lengthM / 8);
	let from = 0;
	while (from < sample.length - 1 && way[from] < startM - reach) from++;
	let to = sample.length - 1;
	while (to > from && way[to] > endM + reach) to--;
	const blend = Math.min(startM - way[from], way[to] - endM, reach);
	const drift = blend < LEAST_BLEND_M;
	if (drift) {
		while (way[from] < startM - 1e-6) from++;
		while (way[to] > endM + 1e-6) to--;
	}
	const count = to - from + 1;
	const points: LapPoints = {
		...positions,
		sample: sample.subarray(from, to + 1),
		xM: around.xM.slice(from, to + 1),
		yM: around.yM.slice(from, to + 1),
		atM: new Float64Array(count),
		weights: new Float64Array(count).fill(1),
		lengthM
	};
	// of the gap only what lies across counts; along it is the way between the last and the first position
	const { xM: x, yM: y } = points;
	const [acrossX, acrossY] = drift
		? across(x[count - 1] - x[0], y[count - 1] - y[0], x[1] - x[0], y[1] - y[0])
		: [0, 0];
	for (let k = 0; k < count; k++) {
		const at = way[from + k] - startM;
		points.atM[k] = at;
		if (drift) {
			const share = at / lengthM - 0.5;
			x[k] -= acrossX * share;
			y[k] -= acrossY * share;
		} else points.weights[k] = fade(at, blend) - fade(at - lengthM, blend);
	}
	return points;
}

/** The positions from some time before a stretch to some time behind it. */
export function within(
	positions: Positions,
	{ timeS }: Channels,
	{ startS, endS }: Stretch,
	marginS: number
): Positions {
	const { sample } = positions;
	let from = 0;
	while (from < sample.length - 2 && timeS[sample[from]] < startS - marginS) from++;
	let to = sample.length;
	while (to > from + 2 && timeS[sample[to - 1]] > endS + marginS) to--;
	return {
		...positions,
		sample: sample.subarray(from, to),
		xM: positions.xM.subarray(from, to),
		yM: positions.yM.subarray(from, to)
	};
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
function refit(line: EvenLine, laps: LapPoints[], channels: Channels, lambda: number): EvenLine {
	const geometry = geometryOfLine(line, curvatureOf(line));
	const total = laps.reduce((sum, lap) => sum + lap.sample.length, 0);
	const atM = new Float64Array(total);
	const xM = new Float64Array(total);
	const yM = new Float64Array(total);
	const weights = new Float64Array(total);
	let count = 0;
	for (const lap of laps) {
		const { placeM } = trackOnPath(lap, channels, geometry);
		for (let k = 0; k < placeM.length; k++) {
			if (Number.isNaN(placeM[k])) continue;
			atM[count] = placeM[k];
			xM[count] = lap.xM[k];
			yM[count] = lap.yM[k];
			weights[count++] = lap.weights[k];
		}
	}
	return fitEvenLine(
		{
			atM: atM.subarray(0, count),
			xM: xM.subarray(0, count),
			yM: yM.subarray(0, count),
			weights: weights.subarray(0, count),
			lengthM: line.lengthM,
			closed: true
		},
		lambda
	);
}
