import { KMH_PER_MPS } from '../../units.ts';

/**
 * How fast the car gains speed, m/s², by the change of speed over a span around each sample.
 *
 * @param halfSpanS half of that span, s; at least one sample to each side
 */
export function gainsMps2(speedKmh: Float64Array, timeS: Float64Array, halfSpanS: number): Float64Array {
	const last = timeS.length - 1;
	const half = Math.max(1, Math.round((halfSpanS * last) / (timeS[last] - timeS[0])));
	const gains = new Float64Array(timeS.length);
	for (let i = 0; i <= last; i++) {
		const from = i < half ? 0 : i - half;
		const to = i + half > last ? last : i + half;
		gains[i] = (speedKmh[to] - speedKmh[from]) / (KMH_PER_MPS * (timeS[to] - timeS[from]));
	}
	return gains;
}
