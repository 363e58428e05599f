import { gainsMps2 } from './gains.ts';

const LARGEST_LAG_S = 0.5;
/** A lag under this (s) is not worth moving a channel for. */
const LEAST_LAG_S = 0.02;
/** A wheel spins up before the car follows: up to this lead (s) is slip (0.11 s in simulator recordings without any lag), not a clock. */
const SLIP_LEAD_S = 0.2;
/** Two channels that follow each other less than this cannot be laid on each other. */
const LEAST_CORRELATION = 0.8;
/** By how much the best lag must fit better than none. */
const LEAST_GAIN = 0.01;
const GAIN_HALF_SPAN_S = 0.1;
const MAX_SAMPLES = 5000;

/**
 * By how much one speed's clock lags another's: the shift that lays their accelerations on each other best, with a parabola through the
 * best three. Slip makes a wheel lead the car a little, never lag it, so that a small lead is left alone.
 *
 * @returns s, positive where `laggingKmh` comes late; 0 where no clear lag is seen
 */
export function clockLag(laggingKmh: Float64Array, speedKmh: Float64Array, timeS: Float64Array): number {
	const late = gainsMps2(laggingKmh, timeS, GAIN_HALF_SPAN_S);
	const own = gainsMps2(speedKmh, timeS, GAIN_HALF_SPAN_S);
	const stepS = (timeS[timeS.length - 1] - timeS[0]) / (timeS.length - 1);
	const reach = Math.round(LARGEST_LAG_S / stepS);
	if (reach < 2 || timeS.length < 20 * reach) return 0;
	const stride = Math.max(1, Math.floor(timeS.length / MAX_SAMPLES));
	const fits = Float64Array.from({ length: 2 * reach + 1 }, (_, k) => correlation(late, own, k - reach, reach, stride));
	let best = reach;
	for (let k = 1; k < fits.length - 1; k++) if (fits[k] > fits[best]) best = k;
	if (
		best === 0 ||
		best === fits.length - 1 ||
		!(fits[best] > LEAST_CORRELATION) ||
		fits[best] - fits[reach] < LEAST_GAIN
	)
		return 0;
	const [before, at, after] = [fits[best - 1], fits[best], fits[best + 1]];
	const lag = (best - reach + (before - after) / (2 * (before - 2 * at + after))) * stepS;
	return lag > LEAST_LAG_S || lag < -SLIP_LEAD_S ? lag : 0;
}

/** Correlation of late[i + shift] with own[i], means taken off. */
function correlation(late: Float64Array, own: Float64Array, shift: number, reach: number, stride: number): number {
	let [n, x, y, xx, yy, xy] = [0, 0, 0, 0, 0, 0];
	for (let i = reach; i < own.length - reach; i += stride) {
		const [a, b] = [late[i + shift], own[i]];
		if (!Number.isFinite(a) || !Number.isFinite(b)) continue;
		n++;
		x += a;
		y += b;
		xx += a * a;
		yy += b * b;
		xy += a * b;
	}
	return (n * xy - x * y) / Math.sqrt((n * xx - x * x) * (n * yy - y * y));
}
