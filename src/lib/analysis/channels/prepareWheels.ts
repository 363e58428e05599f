import type { Wheel } from '../../schemas/analysisDocument.ts';
import type { RawRun } from '../../parse/rawRun.ts';
import { KMH_PER_MPS } from '../../units.ts';
import { gainsMps2 } from './gains.ts';
import { ratioPercentile } from './percentile.ts';
import { takeColumn } from './takeColumn.ts';

const WHEELS = { fl: 'wheelSpeedFl', fr: 'wheelSpeedFr', rl: 'wheelSpeedRl', rr: 'wheelSpeedRr' } as const;
/** The radius is fitted where tyres roll: fast, hardly any longitudinal force. */
const MIN_KMH = 40;
const MAX_GAIN_MPS2 = 1.5;
const GAIN_HALF_SPAN_S = 0.06;
/** A lag under this (s) is not worth moving a channel for. */
const LEAST_LAG_S = 0.015;
const LARGEST_LAG_S = 0.5;

/**
 * Wheel speeds at the tread, km/h: rotation times a rolling radius fitted per wheel while the tyre rolls freely, rolling speeds brought to the car's
 * by the same fit, and the wheels' clock moved where it demonstrably lags the speed's.
 *
 * @returns null where the file has no wheel speed; NaN for a wheel that is missing
 */
export function prepareWheels(raw: RawRun, speedKmh: Float64Array): Record<Wheel, Float64Array> | null {
	const present = Object.values(WHEELS).filter((channel) => raw.columns[channel]);
	if (present.length === 0) return null;
	const { timeS } = raw;
	const gain = gainsMps2(speedKmh, timeS, GAIN_HALF_SPAN_S);
	const prepared = {} as Partial<Record<Wheel, Float64Array>>;
	for (const [wheel, channel] of wheelEntries()) {
		const column = raw.columns[channel];
		prepared[wheel] = column
			? fitted(takeColumn(column, timeS).values, speedKmh, gain, timeS)
			: new Float64Array(timeS.length).fill(NaN);
	}
	const { fl, fr, rl, rr } = prepared;
	return fl && fr && rl && rr ? { fl, fr, rl, rr } : null;
}

function wheelEntries(): [Wheel, (typeof WHEELS)[Wheel]][] {
	return [
		['fl', WHEELS.fl],
		['fr', WHEELS.fr],
		['rl', WHEELS.rl],
		['rr', WHEELS.rr]
	];
}

function fitted(values: Float64Array, speedKmh: Float64Array, gain: Float64Array, timeS: Float64Array): Float64Array {
	const rolling = (i: number) => speedKmh[i] > MIN_KMH && Math.abs(gain[i]) < MAX_GAIN_MPS2 && values[i] > 0;
	let scale = ratioPercentile(speedKmh, values, 0.5, rolling);
	if (!Number.isFinite(scale))
		scale = ratioPercentile(speedKmh, values, 0.5, (i) => speedKmh[i] > MIN_KMH / 2 && values[i] > 0);
	if (!Number.isFinite(scale)) scale = 1;
	for (let i = 0; i < values.length; i++) values[i] *= scale;
	const lag = lagOf(values, speedKmh, gain);
	return Math.abs(lag) >= LEAST_LAG_S && Math.abs(lag) <= LARGEST_LAG_S ? shifted(values, timeS, lag) : values;
}

/**
 * By how much a wheel's clock lags, s: w(t) = v(t − lag) differs from v by −lag · dv/dt, and the slope of one on the other over samples without
 * hard braking or wheelspin gives it.
 */
function lagOf(values: Float64Array, speedKmh: Float64Array, gain: Float64Array): number {
	let [squares, products, count] = [0, 0, 0];
	for (let i = 0; i < values.length; i++) {
		const differenceMps = (values[i] - speedKmh[i]) / KMH_PER_MPS;
		if (!(speedKmh[i] > MIN_KMH) || !(Math.abs(gain[i]) < 5) || !(Math.abs(differenceMps) < 0.1 * speedKmh[i]))
			continue;
		squares += gain[i] * gain[i];
		products += gain[i] * differenceMps;
		count++;
	}
	if (count < 200 || squares === 0) return 0;
	const slope = products / squares;
	// Slip under force looks alike (w grows with the driving force): only a lag well beyond it counts.
	return Math.abs(slope) > 0.06 ? -slope : 0;
}

function shifted(values: Float64Array, timeS: Float64Array, lagS: number): Float64Array {
	const out = new Float64Array(values.length);
	let k = 0;
	for (let i = 0; i < values.length; i++) {
		const target = timeS[i] + lagS;
		while (k + 1 < values.length - 1 && timeS[k + 1] < target) k++;
		while (k > 0 && timeS[k] > target) k--;
		const share = (target - timeS[k]) / (timeS[k + 1] - timeS[k]);
		out[i] =
			share < 0 || share > 1
				? values[Math.min(values.length - 1, Math.max(0, share < 0 ? k : k + 1))]
				: values[k] + share * (values[k + 1] - values[k]);
	}
	return out;
}
