import { median } from '../stats/quantile.ts';
import type { Channels } from '../model.ts';
import type { Positions } from '../path/freshPositions.ts';
import { crossLine } from './crossLine.ts';
import type { Crossing } from './crossLine.ts';
import type { StartLine } from './lapMarks.ts';

/** The line is drawn where the car first exceeds this. */
const MOVING_KMH = 10;
/** A chosen line reaches this far: wide tracks are 15 m, and the neighbouring straight of a kart track is not much further. */
const CHOSEN_REACH_M = 15;
/** A line taken from lap marks reaches far enough for a pit lane beside the track. */
const MARKED_REACH_M = 60;

/** Crossings closer together are the same one. */
const AT_ONCE_S = 3;

/** Direction of travel around a position, from a chord that noise cannot turn. */
function courseAt({ xM, yM, noiseM }: Positions, j: number): number {
	const reach = Math.max(2, 20 * noiseM);
	let low = j;
	let high = j;
	while (low > 0 && Math.hypot(xM[low] - xM[j], yM[low] - yM[j]) < reach) low--;
	while (high < xM.length - 1 && Math.hypot(xM[high] - xM[j], yM[high] - yM[j]) < reach) high++;
	return Math.atan2(yM[high] - yM[low], xM[high] - xM[low]);
}

/**
 * The line that lap marks of the file stand for: square to the mean course at the marks, at a place that lies within every marked
 * sample step, or in the middle of the steps where noise leaves no such place.
 *
 * @param marks first samples behind the crossings
 * @returns null where no mark has positions on both sides
 */
export function lineThroughMarks(marks: number[], positions: Positions): StartLine | null {
	const { sample, xM, yM } = positions;
	const steps: number[] = [];
	let j = 1;
	for (const mark of marks) {
		while (j < sample.length && sample[j] < mark) j++;
		if (j < sample.length && sample[j - 1] < mark) steps.push(j);
	}
	if (steps.length === 0) return null;
	let ux = 0;
	let uy = 0;
	for (const k of steps) {
		const course = courseAt(positions, k);
		ux += Math.cos(course);
		uy += Math.sin(course);
	}
	const headingRad = Math.atan2(uy, ux);
	const x0 = median(steps.map((k) => (xM[k - 1] + xM[k]) / 2));
	const y0 = median(steps.map((k) => (yM[k - 1] + yM[k]) / 2));
	const along = (k: number) => (xM[k] - x0) * Math.cos(headingRad) + (yM[k] - y0) * Math.sin(headingRad);
	const latestBefore = Math.max(...steps.map((k) => along(k - 1)));
	const earliestBehind = Math.min(...steps.map((k) => along(k)));
	const shift =
		latestBefore < earliestBehind
			? (latestBefore + earliestBehind) / 2
			: median(steps.map((k) => (along(k - 1) + along(k)) / 2));
	return {
		xM: x0 + shift * Math.cos(headingRad),
		yM: y0 + shift * Math.sin(headingRad),
		headingRad,
		leftM: MARKED_REACH_M,
		rightM: MARKED_REACH_M
	};
}

/**
 * Draws a line square to the path at the first sample over 10 km/h; where the run does not come by there again (a pit lane, a
 * paddock), at its fastest sample.
 *
 * @returns the line and its crossings; null where the run does not exceed 10 km/h
 */
export function chooseLine(
	positions: Positions,
	channels: Channels
): { line: StartLine; crossings: Crossing[] } | null {
	const { sample } = positions;
	const first = sample.findIndex((i) => channels.speedKmh[i] > MOVING_KMH);
	if (first < 0) return null;
	const chosen = lineAt(positions, channels, first);
	if (chosen.crossings.length >= 2) return chosen;
	let fastest = first;
	for (let j = first; j < sample.length; j++) {
		if (channels.speedKmh[sample[j]] > channels.speedKmh[sample[fastest]]) fastest = j;
	}
	const other = lineAt(positions, channels, fastest);
	return other.crossings.length > chosen.crossings.length && other.crossings.length >= 2 ? other : chosen;
}

function lineAt(positions: Positions, channels: Channels, j: number): { line: StartLine; crossings: Crossing[] } {
	const line = {
		xM: positions.xM[j],
		yM: positions.yM[j],
		headingRad: courseAt(positions, j),
		leftM: CHOSEN_REACH_M,
		rightM: CHOSEN_REACH_M
	};
	const crossings = crossLine(line, positions, channels);
	// a run that begins on the move begins on the line
	const atS = channels.timeS[positions.sample[j]];
	if (!crossings.some((crossing) => Math.abs(crossing.atS - atS) < AT_ONCE_S)) {
		crossings.unshift({ atS, leftM: 0, behind: j });
		crossings.sort((a, b) => a.atS - b.atS);
	}
	return { line, crossings };
}
