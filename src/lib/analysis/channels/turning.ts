import { KMH_PER_MPS, RAD_PER_DEG } from '../../units.ts';
import { wrapDegrees } from './localFrame.ts';
import type { Positions } from './preparePositions.ts';

/** Way over which a direction is taken from positions, m: long against their noise, short against a corner. */
const CHORD_M = 12;
const MIN_KMH = 25;

/**
 * How fast the car turns by its own path, rad/s, left positive; a few thousand samples spread over the run, for signs and scales only.
 * NaN where it cannot be told.
 *
 * @returns indices into the run and the turning there; null without positions or heading
 */
export function turningFromPath(
	positions: Positions | null,
	heading: ArrayLike<number> | undefined,
	speedKmh: Float64Array,
	timeS: Float64Array
): { indices: Int32Array; radps: Float64Array } | null {
	if (!positions && !heading) return null;
	const stride = Math.max(1, Math.floor(timeS.length / 8000));
	const indices = Int32Array.from({ length: Math.floor((timeS.length - 1) / stride) + 1 }, (_, i) => i * stride);
	const radps = Float64Array.from(indices, (at) => {
		if (!(speedKmh[at] > MIN_KMH)) return NaN;
		const reachS = (CHORD_M * KMH_PER_MPS) / speedKmh[at];
		const [before, after] = [indexAt(timeS, at, -reachS), indexAt(timeS, at, reachS)];
		if (before === at || after === at) return NaN;
		const spanS = timeS[after] - timeS[before];
		if (!positions) return heading ? (-wrapDegrees(heading[after] - heading[before]) * RAD_PER_DEG) / spanS : NaN;
		const { xM, yM } = positions;
		const [ax, ay] = [xM[at] - xM[before], yM[at] - yM[before]];
		const [bx, by] = [xM[after] - xM[at], yM[after] - yM[at]];
		return Math.atan2(ax * by - ay * bx, ax * bx + ay * by) / (spanS / 2);
	});
	return { indices, radps };
}

/** The sample about `offsetS` away; never past the ends. */
function indexAt(timeS: Float64Array, from: number, offsetS: number): number {
	const target = timeS[from] + offsetS;
	const way = Math.sign(offsetS);
	let i = from;
	while (i + way >= 0 && i + way < timeS.length && (timeS[i] - target) * way < 0) i += way;
	return i;
}

/**
 * Correlation about zero (no means taken off) and least-squares factor of `y` on `x`.
 *
 * @returns correlation NaN with fewer than 20 pairs
 */
export function relate(x: ArrayLike<number>, y: ArrayLike<number>): { correlation: number; factor: number } {
	let [n, xx, yy, xy] = [0, 0, 0, 0];
	for (let i = 0; i < x.length; i++) {
		const product = x[i] * y[i];
		if (!Number.isFinite(product)) continue;
		n++;
		xx += x[i] * x[i];
		yy += y[i] * y[i];
		xy += product;
	}
	return n < 20 || xx === 0 || yy === 0
		? { correlation: NaN, factor: NaN }
		: { correlation: xy / Math.sqrt(xx * yy), factor: xy / xx };
}
