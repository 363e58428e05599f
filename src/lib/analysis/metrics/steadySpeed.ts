import type { PlacedRun } from '../model.ts';
import { sampleBefore } from '../trace/placeTime.ts';
import { noiseLevel } from './noiseLevel.ts';

/** Speed of a run and how noisy it is. */
export interface SpeedTrace {
	timeS: Float64Array;
	speedKmh: Float64Array;
	noiseKmh: number;
	sampleS: number;
}

/** Below this the samples are as good as any average of them. */
const QUIET_KMH = 0.03;
/** Averages grow until they are this sure … */
const WANTED_SD_KMH = 0.1;
/** … or this long: beyond it a braking car's speed bends. */
const LONGEST_WINDOW_S = 0.4;
/** Windows tried for the minimum, in samples on either side. */
const HALF_WINDOWS = [0, 1, 2, 3, 4, 6, 8, 11, 15, 20, 27, 36];
/** A wider average is taken while it agrees with every narrower one to this many s.d. */
const AGREE_SD = 3;
/** The place of a flat minimum is the middle of what lies this close to it. */
const SAME_KMH = 0.05;

export function speedTrace({ channels }: PlacedRun): SpeedTrace {
	const { timeS, speedKmh, sampleRateHz } = channels;
	return { timeS, speedKmh, noiseKmh: noiseLevel(speedKmh), sampleS: 1 / sampleRateHz };
}

/**
 * Speed at a moment: between the samples (constant acceleration), or, where they are noisy, from a straight line through as many
 * samples around it as bring the noise down to 0.1 km/h, 0.4 s at most.
 *
 * @returns km/h; NaN outside the recording
 */
export function speedAt(trace: SpeedTrace, atS: number): number {
	const { timeS, speedKmh, noiseKmh } = trace;
	const i = sampleBefore(timeS, atS);
	if (!(i >= 0 && i + 1 < timeS.length)) return i === timeS.length - 1 && timeS[i] === atS ? speedKmh[i] : NaN;
	const share = (atS - timeS[i]) / (timeS[i + 1] - timeS[i]);
	const between = speedKmh[i] + share * (speedKmh[i + 1] - speedKmh[i]);
	if (!(noiseKmh > QUIET_KMH)) return between;
	const half = halfWindow(trace);
	const line = straightLine(trace, Math.max(0, i + 1 - half), Math.min(timeS.length - 1, i + half), atS);
	return Number.isFinite(line) ? line : between;
}

export interface MinimumSpeed {
	kmh: number;
	/** the middle of a flat minimum */
	timeS: number;
	plusMinusKmh: number;
}

/**
 * Lowest speed between two moments, and when.
 *
 * Quiet speeds: the lowest sample, or, where two even slopes meet between samples, their meeting point. Noisy speeds: the lowest
 * of short averages says where; there the average widens while it agrees with the narrower ones (Lepski's method), so that a flat
 * minimum is averaged long and a sharp one short.
 *
 * @returns null where the recording does not hold the stretch
 */
export function minimumSpeed(trace: SpeedTrace, fromS: number, toS: number): MinimumSpeed | null {
	const { timeS, speedKmh, noiseKmh } = trace;
	const first = sampleBefore(timeS, fromS) + 1;
	const last = sampleBefore(timeS, toS);
	if (!(first > 0 && last >= first)) return null;
	const quiet = !(noiseKmh > QUIET_KMH);
	const half = quiet ? 0 : halfWindow(trace);
	const course = new Float64Array(last - first + 1);
	let lowest = first;
	for (let i = first; i <= last; i++) {
		course[i - first] = quiet ? speedKmh[i] : average(speedKmh, i - half, i + half);
		if (!(course[i - first] >= course[lowest - first])) lowest = i;
	}
	const atEnds = [fromS, toS].map((timeS) => ({ timeS, kmh: speedAt(trace, timeS) }));
	const kmh = quiet ? meetingSpeed(trace, lowest) : widestAverage(trace, lowest, noiseKmh);
	const margin = quiet ? 0 : 2 * QUIET_KMH;
	const end = atEnds.find((one) => one.kmh < Math.min(kmh, course[lowest - first]) - margin);
	if (end) return { ...end, plusMinusKmh: noiseKmh };
	const same = course[lowest - first] + Math.max(SAME_KMH, quiet ? 0 : (2 * noiseKmh) / Math.sqrt(2 * half + 1));
	let a = lowest;
	while (a > first && course[a - 1 - first] <= same) a--;
	let b = lowest;
	while (b < last && course[b + 1 - first] <= same) b++;
	return { kmh, timeS: (timeS[a] + timeS[b]) / 2, plusMinusKmh: quiet ? 0.05 : Math.max(0.1, noiseKmh / 2) };
}

function halfWindow({ noiseKmh, sampleS }: SpeedTrace): number {
	const wanted = (noiseKmh / WANTED_SD_KMH) ** 2 / 2;
	return Math.max(1, Math.min(Math.ceil(wanted), Math.floor(LONGEST_WINDOW_S / 2 / sampleS)));
}

function average(values: Float64Array, from: number, to: number): number {
	const a = Math.max(0, from);
	const b = Math.min(values.length - 1, to);
	let sum = 0;
	for (let i = a; i <= b; i++) sum += values[i];
	return sum / (b - a + 1);
}

/** Where the slopes before and after the lowest sample meet lower than it, and it lies on one of them: their meeting point. */
function meetingSpeed({ timeS, speedKmh: v }: SpeedTrace, m: number): number {
	if (m < 2 || m + 2 >= v.length) return v[m];
	const falling = (v[m - 1] - v[m - 2]) / (timeS[m - 1] - timeS[m - 2]);
	const rising = (v[m + 2] - v[m + 1]) / (timeS[m + 2] - timeS[m + 1]);
	if (!(falling < 0 && rising > 0)) return v[m];
	const onFalling = v[m - 1] + falling * (timeS[m] - timeS[m - 1]);
	const onRising = v[m + 1] + rising * (timeS[m] - timeS[m + 1]);
	const tolerance = Math.max(0.05, 0.03 * Math.min(v[m - 1] - v[m], v[m + 1] - v[m]));
	if (Math.min(Math.abs(onFalling - v[m]), Math.abs(onRising - v[m])) > tolerance) return v[m];
	const meetS = timeS[m] + (onRising - onFalling) / (falling - rising);
	if (!(meetS > timeS[m - 1] && meetS < timeS[m + 1])) return v[m];
	return Math.min(v[m], onFalling + falling * (meetS - timeS[m]));
}

function widestAverage({ speedKmh, sampleS }: SpeedTrace, at: number, noiseKmh: number): number {
	let low = -Infinity;
	let high = Infinity;
	let best = speedKmh[at];
	for (const half of HALF_WINDOWS) {
		if (2 * half * sampleS > 2 * LONGEST_WINDOW_S) break;
		const value = average(speedKmh, at - half, at + half);
		const sd = noiseKmh / Math.sqrt(2 * half + 1);
		if (value < low || value > high) break;
		best = value;
		low = Math.max(low, value - AGREE_SD * sd);
		high = Math.min(high, value + AGREE_SD * sd);
	}
	return best;
}

/** Least-squares line through samples from … to, read at a moment. */
function straightLine({ timeS, speedKmh }: SpeedTrace, from: number, to: number, atS: number): number {
	const n = to - from + 1;
	let meanT = 0;
	let meanV = 0;
	for (let i = from; i <= to; i++) {
		meanT += (timeS[i] - atS) / n;
		meanV += speedKmh[i] / n;
	}
	let tv = 0;
	let tt = 0;
	for (let i = from; i <= to; i++) {
		const t = timeS[i] - atS - meanT;
		tv += t * (speedKmh[i] - meanV);
		tt += t * t;
	}
	return meanV - (tv / tt) * meanT;
}
