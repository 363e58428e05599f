import type { Signal } from './crossing.ts';

export interface LevelOptions {
	/** steepest slope that still counts as level, unit per s */
	steepest: number;
	/** shortest stretch */
	leastS: number;
	/** band in which the signal must lie */
	low: number;
	high: number;
	/** sampling interval */
	sampleS: number;
}

export interface LevelStretch {
	startS: number;
	endS: number;
	/** mean over the stretch */
	level: number;
	firstIndex: number;
	lastIndex: number;
}

/** The slope's s.d. must be this small a share of the steepest slope, or the window over which it is read grows. */
const SLOPE_CERTAINTY = 0.25;
/** A step whose slope differs by more than this share of the steepest from its neighbour's is not all level. */
const MIXED_SHARE = 0.1;

/**
 * Stretches in which a signal stays level: slope under a limit for long enough, within a band.
 *
 * Without noise slopes are read from sample to sample and the ends are drawn on to where the level meets the neighbouring ramps.
 * With noise they are least-squares slopes over a window as wide as the noise asks for, and the ends are moved by what such a
 * window shortens or lengthens a level next to a ramp of the slope found there.
 *
 * @param signal the trace
 * @param from, to  first and last sample looked at
 * @returns in order of time; empty where nothing is level
 */
export function levelStretches(signal: Signal, from: number, to: number, options: LevelOptions): LevelStretch[] {
	const { noise } = signal;
	const { sampleS, steepest } = options;
	const wanted = Math.ceil(((noise * Math.sqrt(12)) / (SLOPE_CERTAINTY * steepest * sampleS)) ** (2 / 3));
	const pairwise = (noise * Math.SQRT2) / sampleS <= SLOPE_CERTAINTY * steepest;
	if (pairwise || sampleS > options.leastS / 2) return pairwiseStretches(signal, from, to, options);
	const half = Math.max(1, Math.min(wanted >> 1, Math.floor(options.leastS / sampleS / 2)));
	return windowedStretches(signal, from, to, half, options);
}

function pairwiseStretches(signal: Signal, from: number, to: number, options: LevelOptions): LevelStretch[] {
	const { timeS, values } = signal;
	const { steepest, leastS, low, high } = options;
	const found: LevelStretch[] = [];
	let since = -1;
	for (let i = from; i <= to; i++) {
		const isLevel =
			i < to &&
			Math.abs(values[i + 1] - values[i]) < steepest * (timeS[i + 1] - timeS[i]) &&
			Math.min(values[i], values[i + 1]) >= low &&
			Math.max(values[i], values[i + 1]) <= high;
		if (isLevel && since < 0) since = i;
		if (isLevel || since < 0) continue;
		const { first, last } = trimmed(signal, since, i, steepest);
		since = -1;
		const startS = timeS[first] - drawnOnS(signal, first, -1);
		const endS = timeS[last] + drawnOnS(signal, last, 1);
		if (endS - startS >= leastS) {
			found.push({ startS, endS, level: mean(values, first, last), firstIndex: first, lastIndex: last });
		}
	}
	return found;
}

/** Leaves out a first and a last step that are part level, part ramp: their slope differs from that of the step inside. */
function trimmed(
	{ timeS, values }: Signal,
	first: number,
	last: number,
	steepest: number
): { first: number; last: number } {
	const slopeAt = (i: number) => (values[i + 1] - values[i]) / (timeS[i + 1] - timeS[i]);
	const differs = (step: number, inside: number) => Math.abs(slopeAt(step) - slopeAt(inside)) > MIXED_SHARE * steepest;
	let a = first;
	let b = last;
	if (b - a >= 3 && differs(a, a + 1)) a++;
	if (b - a >= 3 && differs(b - 1, b - 2)) b--;
	return { first: a, last: b };
}

/** How far a level that ends with sample i goes on towards the next sample (step 1) or the one before (step −1), until it meets the ramp. */
function drawnOnS({ timeS, values }: Signal, i: number, step: 1 | -1): number {
	const next = i + step;
	if (!(next >= 0 && next < values.length)) return 0;
	const lengthS = Math.abs(timeS[next] - timeS[i]);
	const change = values[next] - values[i];
	const beyond = next + step;
	if (!(beyond >= 0 && beyond < values.length) || change === 0) return 0;
	const ramp = (values[beyond] - values[next]) / Math.abs(timeS[beyond] - timeS[next]);
	const least = Math.abs(change) / lengthS;
	const sameWay = Math.sign(ramp) === Math.sign(change);
	if (sameWay && Math.abs(ramp) >= least) return lengthS - Math.abs(change / ramp);
	// the ramp ends before the sample beyond: between what the samples demand and a step
	const slope = 2 * Math.max(least, sameWay ? Math.abs(ramp) : 0);
	return (lengthS - Math.abs(change) / slope) / (sameWay && Math.abs(ramp) > 0 ? 1 : 2);
}

function windowedStretches(
	signal: Signal,
	from: number,
	to: number,
	half: number,
	options: LevelOptions
): LevelStretch[] {
	const { timeS, values } = signal;
	const { steepest, leastS, low, high } = options;
	const slopes = new Float64Array(to - from + 1);
	const means = new Float64Array(to - from + 1);
	for (let i = from; i <= to; i++) {
		const a = Math.max(0, i - half);
		const b = Math.min(values.length - 1, i + half);
		means[i - from] = mean(values, a, b);
		slopes[i - from] = slope(timeS, values, a, b);
	}
	const runs: { first: number; last: number }[] = [];
	let first = -1;
	for (let i = from; i <= to; i++) {
		const isLevel =
			i < to && Math.abs(slopes[i - from]) < steepest && means[i - from] >= low && means[i - from] <= high;
		if (isLevel && first < 0) first = i;
		if (isLevel || first < 0) continue;
		const before = runs.at(-1);
		// noise may tilt a window in the middle of a level
		const goesOn =
			before &&
			first - before.last <= 2 * half &&
			Math.abs(mean(values, before.first, before.last) - mean(values, first, i - 1)) < 2 * signal.noise;
		if (goesOn) before.last = i - 1;
		else runs.push({ first, last: i - 1 });
		first = -1;
	}
	const windowS = 2 * half * options.sampleS;
	return runs.flatMap(({ first, last }) => {
		const startS = timeS[first] - windowShiftS(slopes, first - from, -1, half, steepest) * windowS;
		const endS = timeS[last] + windowShiftS(slopes, last - from, 1, half, steepest) * windowS;
		const isLong = endS - startS >= leastS && Math.abs(slope(timeS, values, first, last)) < steepest;
		return isLong ? [{ startS, endS, level: mean(values, first, last), firstIndex: first, lastIndex: last }] : [];
	});
}

/**
 * How far a corner between a level and a ramp lies beyond the place where the window's slope reaches the limit, in windows. A window of
 * which the share f lies on a ramp of slope s has the least-squares slope s·f²(3 − 2f).
 */
function windowShiftS(slopes: Float64Array, index: number, step: 1 | -1, half: number, steepest: number): number {
	let ramp = steepest;
	for (let k = 1; k <= 2 * half; k++) {
		const beyond = Math.abs(slopes[index + step * k] ?? 0);
		if (beyond > ramp) ramp = beyond;
	}
	const ratio = steepest / ramp;
	let low = 0;
	let high = 1;
	for (let round = 0; round < 20; round++) {
		const f = (low + high) / 2;
		if (f * f * (3 - 2 * f) < ratio) low = f;
		else high = f;
	}
	return 0.5 - low;
}

function mean(values: Float64Array, from: number, to: number): number {
	let sum = 0;
	for (let i = from; i <= to; i++) sum += values[i];
	return sum / (to - from + 1);
}

/** Least-squares slope over samples from … to. */
export function slope(x: Float64Array, y: Float64Array, from: number, to: number): number {
	const meanX = mean(x, from, to);
	const meanY = mean(y, from, to);
	let xy = 0;
	let xx = 0;
	for (let i = from; i <= to; i++) {
		xy += (x[i] - meanX) * (y[i] - meanY);
		xx += (x[i] - meanX) * (x[i] - meanX);
	}
	return xy / xx;
}
