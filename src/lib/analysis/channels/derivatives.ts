import { KMH_PER_MPS } from '../../units.ts';

/** Half the span over which a distance is differentiated, s: long enough for centimetre steps at 100 Hz, short against a braking. */
const DISTANCE_HALF_SPAN_S = 0.1;
/** Half the span of the parabola through positions, s. */
const POSITION_HALF_SPAN_S = 0.3;

/**
 * Speed from a distance: the slope over ±0.1 s, at least one sample to each side.
 *
 * @returns km/h, NaN where the distance is missing
 */
export function speedFromDistance(
	distanceM: Float64Array,
	timeS: Float64Array,
	stepS: number,
	halfSpanS = DISTANCE_HALF_SPAN_S
): Float64Array {
	const half = Math.max(1, Math.round(halfSpanS / stepS));
	const last = timeS.length - 1;
	const speed = new Float64Array(timeS.length);
	for (let i = 0; i <= last; i++) {
		// The same reach to both sides, else the slope belongs to another moment; one-sided only at the very ends.
		const reach = Math.max(1, Math.min(half, i, last - i));
		const [from, to] = [Math.max(0, i - reach), Math.min(last, i + reach)];
		speed[i] = (KMH_PER_MPS * (distanceM[to] - distanceM[from])) / (timeS[to] - timeS[from]);
	}
	return speed;
}

/**
 * Speed from positions: least-squares parabolas in time through x and y over ±0.3 s (at least two samples to each side), so that
 * position noise does not become speed.
 *
 * @returns km/h, NaN where fewer than four positions are near
 */
export function speedFromPositions(
	xM: Float64Array,
	yM: Float64Array,
	timeS: Float64Array,
	stepS: number
): Float64Array {
	const half = Math.max(2, Math.round(POSITION_HALF_SPAN_S / stepS));
	const speed = new Float64Array(timeS.length);
	for (let i = 0; i < timeS.length; i++) {
		const [from, to] = [Math.max(0, i - half), Math.min(timeS.length - 1, i + half)];
		speed[i] = KMH_PER_MPS * Math.hypot(slopeAt(xM, timeS, from, to, timeS[i]), slopeAt(yM, timeS, from, to, timeS[i]));
	}
	return speed;
}

/** Slope at `zeroS` of the least-squares parabola through values[from … to]. */
function slopeAt(values: Float64Array, timeS: Float64Array, from: number, to: number, zeroS: number): number {
	let [n, t1, t2, t3, t4, v0, v1, v2] = [0, 0, 0, 0, 0, 0, 0, 0];
	for (let k = from; k <= to; k++) {
		const value = values[k];
		if (Number.isNaN(value)) continue;
		const t = timeS[k] - zeroS;
		const tt = t * t;
		n++;
		t1 += t;
		t2 += tt;
		t3 += tt * t;
		t4 += tt * tt;
		v0 += value;
		v1 += value * t;
		v2 += value * tt;
	}
	if (n < 4) return NaN;
	// Cramer's rule on the normal equations of a + b t + c t²; b is the slope at t = 0.
	const determinant = n * (t2 * t4 - t3 * t3) - t1 * (t1 * t4 - t3 * t2) + t2 * (t1 * t3 - t2 * t2);
	const slope = n * (v1 * t4 - t3 * v2) - v0 * (t1 * t4 - t3 * t2) + t2 * (t1 * v2 - v1 * t2);
	return slope / determinant;
}
