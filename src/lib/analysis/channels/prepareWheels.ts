import type { Wheel } from '../../schemas/analysisDocument.ts';
import type { RawRun } from '../../parse/rawRun.ts';
import { clockLag } from './clockLag.ts';
import { gainsMps2 } from './gains.ts';
import { ratioPercentile } from './percentile.ts';
import { takeColumn } from './takeColumn.ts';

const WHEELS = { fl: 'wheelSpeedFl', fr: 'wheelSpeedFr', rl: 'wheelSpeedRl', rr: 'wheelSpeedRr' } as const;
/** The radius is fitted where tyres roll: fast, hardly any longitudinal force. */
const MIN_KMH = 40;
const MAX_GAIN_MPS2 = 1.5;
const GAIN_HALF_SPAN_S = 0.06;

/**
 * Wheel speeds at the tread, km/h: rotation times a rolling radius fitted per wheel while the tyre rolls freely, rolling speeds brought to the
 * car's by the same fit, and the wheels' common clock moved where it demonstrably lags the speed's.
 *
 * @returns null where the file has no wheel speed; NaN for a wheel that is missing
 */
export function prepareWheels(raw: RawRun, speedKmh: Float64Array): Record<Wheel, Float64Array> | null {
	const { timeS } = raw;
	const take = (wheel: Wheel) => {
		const column = raw.columns[WHEELS[wheel]];
		return column ? takeColumn(column, timeS).values : new Float64Array(timeS.length).fill(NaN);
	};
	if (!Object.values(WHEELS).some((channel) => raw.columns[channel])) return null;
	const wheels = { fl: take('fl'), fr: take('fr'), rl: take('rl'), rr: take('rr') };
	const gain = gainsMps2(speedKmh, timeS, GAIN_HALF_SPAN_S);
	const all = Object.values(wheels);
	for (const values of all) fitRadius(values, speedKmh, gain);
	const lag = clockLag(middleOf(all), speedKmh, timeS);
	if (lag === 0) return wheels;
	for (const values of all) {
		shift(values, timeS, lag);
		fitRadius(values, speedKmh, gain);
	}
	return wheels;
}

function fitRadius(values: Float64Array, speedKmh: Float64Array, gain: Float64Array): void {
	const rolling = (i: number) => speedKmh[i] > MIN_KMH && Math.abs(gain[i]) < MAX_GAIN_MPS2 && values[i] > 0;
	let scale = ratioPercentile(speedKmh, values, 0.5, rolling);
	if (!Number.isFinite(scale))
		scale = ratioPercentile(speedKmh, values, 0.5, (i) => speedKmh[i] > MIN_KMH / 2 && values[i] > 0);
	if (!Number.isFinite(scale)) return;
	for (let i = 0; i < values.length; i++) values[i] *= scale;
}

/** Mean of the middle two wheels at each sample: one that locks or spins does not move it. */
function middleOf(wheels: readonly Float64Array[]): Float64Array {
	const middle = new Float64Array(wheels[0].length);
	const [a, b, c, d] = wheels;
	for (let i = 0; i < middle.length; i++) {
		const sum = a[i] + b[i] + c[i] + d[i];
		middle[i] = (sum - Math.max(a[i], b[i], c[i], d[i]) - Math.min(a[i], b[i], c[i], d[i])) / 2;
	}
	return middle;
}

/** Moves a channel forward in time by `lagS`, by lines between samples; ends are held. */
function shift(values: Float64Array, timeS: Float64Array, lagS: number): void {
	const source = values.slice();
	const last = values.length - 1;
	let k = 0;
	for (let i = 0; i <= last; i++) {
		const target = timeS[i] + lagS;
		while (k < last - 1 && timeS[k + 1] < target) k++;
		while (k > 0 && timeS[k] > target) k--;
		const share = Math.min(1, Math.max(0, (target - timeS[k]) / (timeS[k + 1] - timeS[k])));
		values[i] = source[k] + share * (source[k + 1] - source[k]);
	}
}
