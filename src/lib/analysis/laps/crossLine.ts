import { KMH_PER_MPS } from '../../units.ts';
import type { Channels } from '../model.ts';
import type { Positions } from '../path/freshPositions.ts';
import { timeShare } from '../trace/placeTime.ts';
import type { StartLine } from './lapMarks.ts';

/** One pass over a line. */
export interface Crossing {
	/** s from the run's first sample, interpolated */
	atS: number;
	/** where on the line, m to the left of its point */
	leftM: number;
	/** first position behind the line, as an index into the positions */
	behind: number;
}

/** The car must cross within this angle of the line's direction: a path that crosses itself is no lap. */
const LARGEST_ANGLE_COS = Math.cos((55 * Math.PI) / 180);
/** A car that stands on the line does not cross it, whatever its receiver says. */
const LEAST_KMH = 4;
/** Distance to be driven between two crossings at least. */
const LEAST_LAP_M = 100;
/** Up to this noise the two positions beside the line say when it was crossed; above, a straight piece through its neighbours does. */
const DIRECT_NOISE_M = 0.02;
const FIT_REACH_M = 40;
const FIT_REACH_S = 1;
/** Positions further apart than this are not joined over the line. */
const LONGEST_STEP_S = 3;

/**
 * Finds every pass of a run over a line in the line's direction.
 *
 * Between the positions before and behind the line the speed changes evenly; with noisy positions a parabola in the driven way
 * through all positions within 40 m and 1 s is used instead.
 *
 * @returns crossings in order of time
 */
export function crossLine(line: StartLine, positions: Positions, channels: Channels): Crossing[] {
	const { sample, xM, yM, noiseM } = positions;
	const { timeS, distanceM } = channels;
	const ux = Math.cos(line.headingRad);
	const uy = Math.sin(line.headingRad);
	const found: Crossing[] = [];
	let before = ahead(0);
	let lastDistance = -Infinity;
	function ahead(j: number): number {
		return (xM[j] - line.xM) * ux + (yM[j] - line.yM) * uy;
	}
	for (let j = 1; j < sample.length; j++) {
		const behind = ahead(j);
		const wasBefore = before;
		before = behind;
		if (!(wasBefore < 0 && behind >= 0)) continue;
		const share = wasBefore / (wasBefore - behind);
		const x = xM[j - 1] + (xM[j] - xM[j - 1]) * share;
		const y = yM[j - 1] + (yM[j] - yM[j - 1]) * share;
		const leftM = -(x - line.xM) * uy + (y - line.yM) * ux;
		if (!(leftM <= line.leftM + 2 * noiseM && leftM >= -line.rightM - 2 * noiseM)) continue;
		if (timeS[sample[j]] - timeS[sample[j - 1]] > LONGEST_STEP_S) continue;
		if (headingCos(positions, j, ux, uy) < LARGEST_ANGLE_COS) continue;
		if (distanceM[sample[j]] - lastDistance < LEAST_LAP_M || channels.speedKmh[sample[j]] < LEAST_KMH) continue;
		lastDistance = distanceM[sample[j]];
		const atS = noiseM <= DIRECT_NOISE_M ? directTime(j, share) : (fittedTime(j) ?? directTime(j, share));
		found.push({ atS, leftM, behind: j });
	}
	return found;

	function directTime(j: number, share: number): number {
		const from = sample[j - 1];
		const to = sample[j];
		const { speedKmh } = channels;
		return timeS[from] + (timeS[to] - timeS[from]) * timeShare(share, speedKmh[from], speedKmh[to]);
	}

	function fittedTime(j: number): number | null {
		const centre = sample[j];
		let low = j;
		let high = j;
		const within = (k: number) =>
			k >= 0 &&
			k < sample.length &&
			Math.abs(distanceM[sample[k]] - distanceM[centre]) <= FIT_REACH_M &&
			Math.abs(timeS[sample[k]] - timeS[centre]) <= FIT_REACH_S;
		while (within(low - 1)) low--;
		while (within(high + 1)) high++;
		if (high - low < 5) return null;
		// ahead = a + b·way + c·way², solved for ahead = 0 by Newton from way = 0
		const [a, b, c] = parabola(low, high, centre);
		if (!(b > 0.3)) return null;
		let way = -a / b;
		for (let k = 0; k < 4; k++) way -= (a + b * way + c * way * way) / (b + 2 * c * way);
		if (!(Math.abs(way) < FIT_REACH_M)) return null;
		let k = low;
		while (k < high - 1 && distanceM[sample[k + 1]] - distanceM[centre] < way) k++;
		const from = sample[k];
		const to = sample[k + 1];
		const start = distanceM[from] - distanceM[centre];
		const span = distanceM[to] - distanceM[from];
		return span > 0
			? timeS[from] +
					(timeS[to] - timeS[from]) * timeShare((way - start) / span, channels.speedKmh[from], channels.speedKmh[to])
			: timeS[from];
	}

	function parabola(low: number, high: number, centre: number): [number, number, number] {
		const s = new Float64Array(5);
		const r = new Float64Array(3);
		for (let k = low; k <= high; k++) {
			const way = distanceM[sample[k]] - distanceM[centre];
			const value = ahead(k);
			let power = 1;
			for (let p = 0; p < 5; p++) {
				s[p] += power;
				if (p < 3) r[p] += power * value;
				power *= way;
			}
		}
		return solveThree([s[0], s[1], s[2], s[1], s[2], s[3], s[2], s[3], s[4]], [r[0], r[1], r[2]]);
	}
}

/** Cosine between the car's course around position j and a direction. */
function headingCos({ sample, xM, yM, noiseM }: Positions, j: number, ux: number, uy: number): number {
	const reach = Math.max(1, 8 * noiseM);
	let low = j - 1;
	let high = j;
	for (let k = 0; k < 200; k++) {
		const length = Math.hypot(xM[high] - xM[low], yM[high] - yM[low]);
		if (length >= reach || (low === 0 && high === sample.length - 1)) {
			return length > 0 ? ((xM[high] - xM[low]) * ux + (yM[high] - yM[low]) * uy) / length : 1;
		}
		if (low > 0) low--;
		if (high < sample.length - 1) high++;
	}
	return 1;
}

/** Cramer's rule for three equations, row by row. */
function solveThree(m: number[], r: [number, number, number]): [number, number, number] {
	const det = (a: number[]) =>
		a[0] * (a[4] * a[8] - a[5] * a[7]) - a[1] * (a[3] * a[8] - a[5] * a[6]) + a[2] * (a[3] * a[7] - a[4] * a[6]);
	const whole = det(m);
	const column = (k: number) => det(m.map((value, i) => (i % 3 === k ? r[Math.floor(i / 3)] : value))) / whole;
	return [column(0), column(1), column(2)];
}

/** Speed in m/s at a sample, 0 where it is not known. */
export function speedMps(channels: Channels, i: number): number {
	return Math.max(channels.speedKmh[i], 0) / KMH_PER_MPS || 0;
}
