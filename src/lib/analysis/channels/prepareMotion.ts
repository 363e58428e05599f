import type { Warning } from '../../schemas/analysisDocument.ts';
import type { RawRun } from '../../parse/rawRun.ts';
import { KMH_PER_MPS } from '../../units.ts';
import { speedFromDistance, speedFromPositions } from './derivatives.ts';
import { percentile, ratioPercentile } from './percentile.ts';
import type { Positions } from './preparePositions.ts';
import { takeColumn } from './takeColumn.ts';

export interface Motion {
	speedKmh: Float64Array;
	distanceM: Float64Array;
	distanceMeasured: boolean;
	warnings: Warning[];
}

/** A share of the column's range by which a lap distance must fall to be a new lap. */
const RESTART_SHARE = 0.4;
/** m/s: no car is faster, so a larger step of the distance is a jump of the file. */
const MAX_SPEED_MPS = 140;
/** A measured distance and speed that differ by more than this (as a share) are scaled differently. */
const SCALE_TOLERANCE = 0.03;
/** A speed column that holds one value for this long while the distance says otherwise stands still. */
const FROZEN_S = 1;
const FROZEN_KMH = 5;
const FROZEN_SHARE = 0.06;
/** Half the span over which the distance is differentiated for that, s: uneven time stamps even out. */
const FROZEN_HALF_SPAN_S = 0.4;

/**
 * Speed and distance of a run: measured where the file has them, else one from the other or from positions; a speed that stands still
 * while the car goes on is taken from the distance there.
 *
 * @param stepS usual time between samples
 */
export function prepareMotion(raw: RawRun, positions: Positions | null, stepS: number): Motion {
	const { timeS, columns } = raw;
	const warnings: Warning[] = [];
	const taken = columns.speed ? takeColumn(columns.speed, timeS) : null;
	const measured = taken && withoutSign(taken.values, raw, warnings);
	const along = measuredDistance(raw, measured);
	let speedKmh = measured;
	if (!speedKmh && along) {
		speedKmh = speedFromDistance(along, timeS, stepS);
		warnings.push({
			code: 'speed_from_distance',
			message: 'the file has no speed; it was taken from the distance',
			row: null
		});
	}
	if (!speedKmh && positions) {
		speedKmh = speedFromPositions(positions.xM, positions.yM, timeS, stepS);
		warnings.push({
			code: 'speed_from_positions',
			message: 'the file has no speed; it was taken from the positions',
			row: null
		});
	}
	if (!speedKmh) throw new RangeError('prepareMotion requires a speed, a distance or positions');
	if (taken && taken.gap.at >= 0) {
		warnings.push({
			code: 'gap',
			message: `speed is missing for ${taken.gap.longestS.toFixed(1)} s`,
			row: raw.fileRow[taken.gap.at]
		});
	}
	if (measured) {
		const source = along ? 'distance' : 'positions';
		const other = along
			? speedFromDistance(along, timeS, stepS, FROZEN_HALF_SPAN_S)
			: positions && speedFromPositions(positions.xM, positions.yM, timeS, stepS);
		if (other) {
			const ratio = warnScale(measured, other, source, warnings);
			replaceFrozen(measured, other, ratio, raw, source, warnings);
		}
	}
	const distanceM = along ?? integrate(speedKmh, timeS);
	return { speedKmh, distanceM, distanceMeasured: along !== null, warnings };
}

/** Rolling backwards is a speed too; a column that is negative throughout has its sign turned. */
function withoutSign(speedKmh: Float64Array, raw: RawRun, warnings: Warning[]): Float64Array {
	let count = 0;
	let first = -1;
	for (let i = 0; i < speedKmh.length; i++) {
		// Half a km/h below nothing is a sensor's rest level.
		if (speedKmh[i] < -0.5) {
			count++;
			if (first < 0) first = i;
		}
		speedKmh[i] = Math.abs(speedKmh[i]);
	}
	if (count > 0) {
		const samples = count === 1 ? '1 sample' : `${count} samples`;
		warnings.push({
			code: 'negative_speed',
			message: `speed is negative in ${samples}; its size was used`,
			row: raw.fileRow[first]
		});
	}
	return speedKmh;
}

/** The distance along the run from the file, never falling, missing cells bridged by the speed; null where there is none to use. */
function measuredDistance(raw: RawRun, speedKmh: Float64Array | null): Float64Array | null {
	const column = raw.columns.distance ?? raw.columns.lapDistance;
	if (!column) return null;
	const { timeS } = raw;
	const span = percentile(column, 1) - percentile(column, 0);
	if (!(span > 0)) return null;
	const along = new Float64Array(column.length).fill(NaN);
	let [last, reached, total] = [-1, 0, 0];
	for (let i = 0; i < column.length; i++) {
		if (!Number.isFinite(column[i])) continue;
		if (last >= 0) {
			const stepS = timeS[i] - timeS[last];
			let step = column[i] - column[last];
			if (step < -RESTART_SHARE * span || step > MAX_SPEED_MPS * stepS + 20)
				step = usualStep(i, last, timeS, column, speedKmh);
			total += step;
		} else total = raw.columns.distance ? column[i] : 0;
		// A projection may step back by centimetres; the way driven does not.
		reached = last < 0 ? total : Math.max(reached, total);
		along[i] = reached;
		last = i;
	}
	bridge(along, timeS, speedKmh);
	return along;
}

/** The way between two samples where the column jumps: from speed, else from the step before. */
function usualStep(
	i: number,
	last: number,
	timeS: Float64Array,
	column: ArrayLike<number>,
	speedKmh: Float64Array | null
): number {
	const stepS = timeS[i] - timeS[last];
	if (speedKmh) {
		const mean = (speedKmh[i] + speedKmh[last]) / 2;
		if (Number.isFinite(mean)) return (mean / KMH_PER_MPS) * stepS;
	}
	const rates: number[] = [];
	for (const [from, to] of [
		[last - 1, last],
		[i, i + 1]
	]) {
		const rate = (column[to] - column[from]) / (timeS[to] - timeS[from]);
		if (rate >= 0 && rate < MAX_SPEED_MPS) rates.push(rate);
	}
	return rates.length > 0 ? (stepS * rates.reduce((sum, rate) => sum + rate, 0)) / rates.length : 0;
}

/** Fills missing distances between known ones: along the speed, scaled so that it ends where the distance goes on. */
function bridge(along: Float64Array, timeS: Float64Array, speedKmh: Float64Array | null): void {
	const first = along.findIndex((value) => !Number.isNaN(value));
	along.fill(along[first], 0, first);
	let known = first;
	for (let i = first + 1; i < along.length; i++) {
		if (Number.isNaN(along[i])) continue;
		if (i > known + 1) {
			const way = speedKmh ? integrate(speedKmh.subarray(known, i + 1), timeS.subarray(known, i + 1)) : null;
			const total = way ? way[way.length - 1] : 0;
			for (let k = known + 1; k < i; k++) {
				const share = way && total > 0 ? way[k - known] / total : (timeS[k] - timeS[known]) / (timeS[i] - timeS[known]);
				along[k] = along[known] + share * (along[i] - along[known]);
			}
		}
		known = i;
	}
	for (let k = known + 1; k < along.length; k++) {
		const mean = speedKmh ? (speedKmh[k] + speedKmh[k - 1]) / 2 : 0;
		along[k] = along[k - 1] + (Number.isFinite(mean) ? (mean / KMH_PER_MPS) * (timeS[k] - timeS[k - 1]) : 0);
	}
}

/** Distance from speed by trapezoids, from 0; over a gap in the speed by the line between its ends. */
export function integrate(speedKmh: Float64Array, timeS: Float64Array): Float64Array {
	const distanceM = new Float64Array(speedKmh.length);
	let last = -1;
	for (let i = 0; i < speedKmh.length; i++) {
		if (i > 0) distanceM[i] = distanceM[i - 1];
		if (Number.isNaN(speedKmh[i])) continue;
		if (last >= 0) {
			const perSecond = (speedKmh[i] - speedKmh[last]) / (timeS[i] - timeS[last]);
			for (let k = last + 1; k <= i; k++) {
				const before = speedKmh[last] + perSecond * (timeS[k - 1] - timeS[last]);
				const after = speedKmh[last] + perSecond * (timeS[k] - timeS[last]);
				distanceM[k] = distanceM[k - 1] + ((before + after) / 2 / KMH_PER_MPS) * (timeS[k] - timeS[k - 1]);
			}
		}
		last = i;
	}
	return distanceM;
}

/**
 * Stretches of one and the same speed during which the car demonstrably went at changing ones are taken from the other source.
 *
 * @param ratio other / measured over the run: a scale that differs is no freeze
 */
function replaceFrozen(
	speedKmh: Float64Array,
	otherKmh: Float64Array,
	ratio: number,
	raw: RawRun,
	source: string,
	warnings: Warning[]
): void {
	const { timeS, fileRow } = raw;
	for (let start = 0; start < speedKmh.length;) {
		const level = speedKmh[start];
		let end = start + 1;
		while (end < speedKmh.length && speedKmh[end] === level) end++;
		const lasted = timeS[end - 1] - timeS[start];
		if (end - start >= 5 && lasted >= FROZEN_S && level > 0) {
			const limit = Math.max(FROZEN_KMH, FROZEN_SHARE * level);
			let [apart, low, high] = [0, Infinity, -Infinity];
			for (let i = start; i < end; i++) {
				const other = otherKmh[i] / ratio;
				if (Math.abs(other - level) > limit) apart++;
				if (other < low) low = other;
				if (other > high) high = other;
			}
			if (apart * 4 >= end - start && high - low > limit) {
				// The freeze begins with the last live value, which stays.
				for (let i = start + 1; i < end; i++) speedKmh[i] = otherKmh[i] / ratio;
				warnings.push({
					code: 'frozen_channel',
					message: `speed stands still at ${level.toFixed(1)} km/h for ${lasted.toFixed(1)} s while the car goes on; it was taken from the ${source} there`,
					row: fileRow[start]
				});
			}
		}
		start = end;
	}
}

/** Median of other / measured where the car is fast, since noise adds to slow speeds; told where it is off. */
function warnScale(speedKmh: Float64Array, otherKmh: Float64Array, against: string, warnings: Warning[]): number {
	const fast = 0.6 * percentile(speedKmh, 0.95);
	const ratio = ratioPercentile(otherKmh, speedKmh, 0.5, (i) => speedKmh[i] > fast);
	if (!(ratio > 0)) return 1;
	if (Math.abs(ratio - 1) > SCALE_TOLERANCE) {
		const percent = Math.round((1 / ratio - 1) * 100);
		const sense = percent > 0 ? `${percent} % higher` : `${-percent} % lower`;
		warnings.push({ code: 'speed_scale_differs', message: `speed is ${sense} than by the ${against}`, row: null });
	}
	return ratio;
}
