import { smoothScattered } from '../stats/smoothScattered.ts';

/** A smooth line through a plane as points at even arc length. */
export interface EvenLine {
	/** m between neighbouring points along the line, close to 1 */
	stepM: number;
	/** m along the line, from the first point to the last, or all the way round when closed */
	lengthM: number;
	/** the last point is followed by the first */
	closed: boolean;
	xM: Float64Array;
	yM: Float64Array;
}

export interface ScatteredLine {
	/** place of each point along the line, m; any values when closed (they wrap), else within 0 … lengthM */
	atM: Float64Array;
	xM: Float64Array;
	yM: Float64Array;
	weights: Float64Array | null;
	/** approximate length of the line, m */
	lengthM: number;
	closed: boolean;
}

/**
 * Fits a smooth line through scattered points whose place along it is roughly known, and measures it anew, so that its points
 * lie at even arc length.
 *
 * @param lambda strength of the smoothing, see `smoothScattered`
 */
export function fitEvenLine({ atM, xM, yM, weights, lengthM, closed }: ScatteredLine, lambda: number): EvenLine {
	const spans = Math.max(8, Math.round(lengthM));
	const nodes = closed ? spans : spans + 1;
	const at = atM.map((place) => (place * spans) / lengthM);
	const [x, y] = smoothScattered(at, [xM, yM], weights, { nodes, lambda, closed });
	return evenOut(x, y, closed);
}

/** Places the points of a smooth line, which are nearly even, at exactly even arc length. */
export function evenOut(x: Float64Array, y: Float64Array, closed: boolean): EvenLine {
	const n = x.length;
	const spans = closed ? n : n - 1;
	const arc = new Float64Array(spans + 1);
	for (let i = 0; i < spans; i++) arc[i + 1] = arc[i] + arcLength(x, y, i, closed);
	const lengthM = arc[spans];
	const evenSpans = Math.max(8, Math.round(lengthM));
	const stepM = lengthM / evenSpans;
	const count = closed ? evenSpans : evenSpans + 1;
	const evenX = new Float64Array(count);
	const evenY = new Float64Array(count);
	for (let k = 0, i = 0; k < count; k++) {
		const place = Math.min(k * stepM, lengthM);
		while (i < spans - 1 && arc[i + 1] <= place) i++;
		const share = (place - arc[i]) / (arc[i + 1] - arc[i]);
		evenX[k] = cubicBetween(x, i, share, closed);
		evenY[k] = cubicBetween(y, i, share, closed);
	}
	return { stepM, lengthM, closed, xM: evenX, yM: evenY };
}

/** Value between grid points i and i + 1 on the cubic through the four around them. */
export function cubicBetween(values: Float64Array, i: number, share: number, closed: boolean): number {
	const n = values.length;
	if (!closed) {
		const first = Math.max(0, Math.min(n - 4, i - 1));
		return cubic(values[first], values[first + 1], values[first + 2], values[first + 3], i - first + share);
	}
	return cubic(values[(i - 1 + n) % n], values[i % n], values[(i + 1) % n], values[(i + 2) % n], 1 + share);
}

/** Lagrange's cubic through (0, a), (1, b), (2, c), (3, d). */
function cubic(a: number, b: number, c: number, d: number, u: number): number {
	const p = u - 1;
	const q = u - 2;
	const r = u - 3;
	return (-a * p * q * r) / 6 + (b * u * q * r) / 2 - (c * u * p * r) / 2 + (d * u * p * q) / 6;
}

/** Arc over the chord from i to i + 1: an arc of curvature κ is longer than its chord c by κ²c³/24. */
function arcLength(x: Float64Array, y: Float64Array, i: number, closed: boolean): number {
	const n = x.length;
	const j = closed ? (i + 1) % n : i + 1;
	const chord = Math.hypot(x[j] - x[i], y[j] - y[i]);
	const turn = (turnAt(x, y, i, closed) + turnAt(x, y, j, closed)) / 2;
	return chord * (1 + (turn * turn) / 24);
}

/** Angle by which the line turns at point i, rad. */
function turnAt(x: Float64Array, y: Float64Array, i: number, closed: boolean): number {
	const n = x.length;
	const before = closed ? (i - 1 + n) % n : Math.max(0, i - 1);
	const behind = closed ? (i + 1) % n : Math.min(n - 1, i + 1);
	const ax = x[i] - x[before];
	const ay = y[i] - y[before];
	const bx = x[behind] - x[i];
	const by = y[behind] - y[i];
	return Math.atan2(ax * by - ay * bx, ax * bx + ay * by);
}

/**
 * Curvature at each point of an even line, left positive: angle turned at the point over the way, 1/m.
 */
export function curvatureOf({ xM, yM, stepM, closed }: EvenLine): Float64Array {
	return xM.map((_, i) => turnAt(xM, yM, i, closed) / stepM);
}
