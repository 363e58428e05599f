import type { Wheel } from '../../schemas/analysisDocument.ts';
import { KMH_PER_MPS } from '../../units.ts';

export const WHEELS: readonly Wheel[] = ['fl', 'fr', 'rl', 'rr'];

/** What ties a car's wheel speeds to its own speed. */
export interface WheelFit {
	/** speed at the tread per value of the channel: what is left of the rolling radius */
	scale: Record<Wheel, number>;
	/** s by which the wheels' clock is behind the speed's: a wheel's value at t + lag belongs to the speed at t */
	lagS: number;
	/** distance of the left from the right wheels, m; 0 where no yaw rate is known */
	trackM: number;
}

export interface WheelChannels {
	timeS: Float64Array;
	speedKmh: Float64Array;
	wheelKmh: Record<Wheel, Float64Array>;
	/** counter-clockwise positive; null where not known */
	yawRateRadps: Float64Array | null;
	sampleRateHz: number;
}

/** Speeds below this are too small for ratios. */
const SLOWEST_KMH = 40;
/** A wheel that neither drives nor brakes much rolls. */
const ROLLING_MPS2 = { from: -3, to: 1.5 };
const MOST_SAMPLES = 1500;
const LARGEST_LAG_S = 0.4;
/** A lag is believed when it takes away this share of what the wheels differ by. */
const LAG_GAIN = 0.15;
/** Wheels of a road or racing car stand this far apart; what falls outside is not the track. */
const TRACK_M = { from: 0.7, to: 2.5 };
const TURNING_RADPS = 0.12;

/**
 * Fits rolling radii, clock lag and track width of a run, each robustly (medians and least absolute deviations), so that locks, wheel
 * spin and drop-outs do not matter.
 *
 * @param channels the run
 * @param isBraking whether the brake is on at a sample
 * @returns null where the run never rolls
 */
export function fitWheels(channels: WheelChannels, isBraking: (i: number) => boolean): WheelFit | null {
	const rolling = rollingSamples(channels, isBraking);
	if (rolling.length < 20) return null;
	const { speedKmh, wheelKmh } = channels;
	const ratios = (wheel: Wheel) => median(rolling.map((i) => speedKmh[i] / wheelKmh[wheel][i]));
	const scale = { fl: ratios('fl'), fr: ratios('fr'), rl: ratios('rl'), rr: ratios('rr') };
	const known = WHEELS.filter((wheel) => scale[wheel] > 0);
	if (known.length === 0) return null;
	return { scale, lagS: fitLag(channels, scale, known), trackM: fitTrack(channels, scale, rolling) };
}

function rollingSamples({ timeS, speedKmh, sampleRateHz }: WheelChannels, isBraking: (i: number) => boolean): number[] {
	const reach = Math.max(1, Math.round(0.1 * sampleRateHz));
	const fits: number[] = [];
	const stride = Math.max(1, Math.floor(timeS.length / (8 * MOST_SAMPLES)));
	for (let i = reach; i + reach < timeS.length; i += stride) {
		if (!(speedKmh[i] > SLOWEST_KMH) || isBraking(i)) continue;
		const acceleration =
			(speedKmh[i + reach] - speedKmh[i - reach]) / KMH_PER_MPS / (timeS[i + reach] - timeS[i - reach]);
		if (acceleration > ROLLING_MPS2.from && acceleration < ROLLING_MPS2.to) fits.push(i);
	}
	return thinned(fits);
}

/** Least absolute deviation of the wheels' speeds from the car's, over lags; parabola through the best and its neighbours. */
function fitLag(channels: WheelChannels, scale: Record<Wheel, number>, known: Wheel[]): number {
	const { timeS, speedKmh, sampleRateHz } = channels;
	const reach = Math.max(1, Math.round(0.1 * sampleRateHz));
	const most = Math.ceil(LARGEST_LAG_S * sampleRateHz);
	const changing: { i: number; size: number }[] = [];
	for (let i = most + 1; i + most + 1 < timeS.length; i += Math.max(1, Math.floor(timeS.length / (8 * MOST_SAMPLES)))) {
		const size = Math.abs(speedKmh[i + reach] - speedKmh[i - reach]);
		if (speedKmh[i] > SLOWEST_KMH && size > 0) changing.push({ i, size });
	}
	changing.sort((a, b) => b.size - a.size);
	const samples = changing.slice(0, MOST_SAMPLES).map((one) => one.i);
	if (samples.length < 50) return 0;
	const cost = (shift: number) => {
		let sum = 0;
		for (const wheel of known) {
			const values = channels.wheelKmh[wheel];
			for (const i of samples) {
				const rest = Math.abs(values[i + shift] * scale[wheel] - speedKmh[i]);
				// a lock or a drop-out may cost no more than a wheel that is a tenth off
				sum += rest >= 0 ? Math.min(rest, 0.1 * speedKmh[i]) : 0;
			}
		}
		return sum;
	};
	let best = 0;
	const costs = new Map<number, number>();
	for (let shift = -most; shift <= most; shift++) {
		costs.set(shift, cost(shift));
		if ((costs.get(shift) ?? 0) < (costs.get(best) ?? Infinity)) best = shift;
	}
	const [none = 0, here = 0, left, right] = [0, best, best - 1, best + 1].map((shift) => costs.get(shift));
	if (!(here < (1 - LAG_GAIN) * none)) return 0;
	const bend = left === undefined || right === undefined ? 0 : left - 2 * here + right;
	const part = bend > 0 && left !== undefined && right !== undefined ? (left - right) / (2 * bend) : 0;
	return (best + Math.max(-0.5, Math.min(0.5, part))) / sampleRateHz;
}

function fitTrack({ yawRateRadps, wheelKmh }: WheelChannels, scale: Record<Wheel, number>, rolling: number[]): number {
	if (!yawRateRadps) return 0;
	const pairs: [Wheel, Wheel][] = [
		['fl', 'fr'],
		['rl', 'rr']
	];
	const widths = pairs.flatMap(([left, right]) =>
		rolling
			.filter((i) => Math.abs(yawRateRadps[i]) > TURNING_RADPS)
			.map((i) => (wheelKmh[right][i] * scale[right] - wheelKmh[left][i] * scale[left]) / KMH_PER_MPS / yawRateRadps[i])
	);
	const width = widths.length < 20 ? 0 : median(widths);
	return width >= TRACK_M.from && width <= TRACK_M.to ? width : 0;
}

function thinned(indices: number[]): number[] {
	if (indices.length <= MOST_SAMPLES) return indices;
	const step = indices.length / MOST_SAMPLES;
	return Array.from({ length: MOST_SAMPLES }, (_, k) => indices[Math.floor(k * step)]);
}

function median(values: number[]): number {
	const finite = Float64Array.from(values.filter((value) => Number.isFinite(value))).sort();
	return finite.length === 0 ? NaN : finite[finite.length >> 1];
}
