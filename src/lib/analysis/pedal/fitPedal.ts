import { errorFunction } from 'simple-statistics';
import { fitCurve, type CurveFit, type CurveParameter } from '../stats/fitCurve.ts';
import { robustSpread } from '../stats/robustSpread.ts';
import { pedalOutput, type PedalCurve } from './pedalCurve.ts';

/** Samples of a sweep, as fractions of the full input and of the full output. */
export interface SweepSamples {
	input: Float64Array;
	output: Float64Array;
	/** 1 pressing, −1 releasing, 0 unknown */
	direction: Int8Array;
}

export interface PedalFit {
	curve: PedalCurve;
	gammaSe: number;
	degreesOfFreedom: number;
	residualSd: number;
	/** output minus curve; NaN where a sample was left out as wild */
	residuals: Float64Array;
	outliers: number;
}

/** More samples tell nothing new and cost time: neighbours are averaged down to this many. */
const MOST_SAMPLES = 3000;
/** As many are enough to tell which start leads to the lowest valley. */
const SAMPLES_OF_STARTS = 250;
const GAMMA_STARTS = [0.6, 1.2, 2.2];
/** A residual beyond this many robust standard deviations, and beyond 1 % of the output, is a spike. */
const WILD_SDS = 6;
const WILD_LEAST = 0.01;

export interface FitOptions {
	/** the sweep ends before the full output: saturation is not seen */
	partial: boolean;
	/** the highest output is known (in units of `output`), so a partial sweep tells where it would be reached */
	knownTop: boolean;
	/** both directions are there, so the hysteresis can be told */
	bothWays: boolean;
}

/**
 * Fits exponent, dead zone, saturation, highest output and hysteresis at once, by least squares on the output. One curve
 * serves pressing and releasing; releasing is shifted along the input.
 */
export function fitPedal(samples: SweepSamples, options: FitOptions): PedalFit {
	const thinned = thin(samples, MOST_SAMPLES);
	const start = bestFit(thin(samples, SAMPLES_OF_STARTS), options);
	const rough = bestFit(thinned, options, { values: start.values });
	const noise = robustSpread(residualsOf(rough.values, thinned));
	const first = simplest(thinned, options, bestFit(thinned, options, { values: rough.values, noise }), noise);
	const residuals = residualsOf(first.values, samples);
	const wild = Math.max(WILD_LEAST, WILD_SDS * robustSpread(residuals));
	const kept = residuals.map((value) => (Math.abs(value) > wild ? NaN : value));
	const outliers = kept.reduce((count, value) => count + (Number.isNaN(value) ? 1 : 0), 0);
	const clean = outliers > 0 && outliers < 0.1 * kept.length ? thin(without(samples, kept), MOST_SAMPLES) : null;
	const fit = clean ? simplest(clean, options, bestFit(clean, options, { values: first.values, noise }), noise) : first;
	const curve = curveOf(fit.values);
	const final = residualsOf(fit.values, samples);
	return {
		curve,
		gammaSe: fit.standardErrors[0],
		degreesOfFreedom: fit.degreesOfFreedom,
		residualSd: fit.residualSd,
		residuals: clean ? final.map((value, i) => (Number.isNaN(kept[i]) ? NaN : value)) : final,
		outliers: clean ? outliers : 0
	};
}

/** γ of a part of the travel alone, everything else as found. */
export function fitGammaWithin(
	samples: SweepSamples,
	curve: PedalCurve,
	from: number,
	to: number
): { gamma: number; se: number; degreesOfFreedom: number } | null {
	const shareOf = (i: number) => {
		const input = samples.input[i] + (samples.direction[i] < 0 ? curve.hysteresis : 0);
		return (input - curve.dead) / (curve.saturation - curve.dead);
	};
	const within = thin(
		select(samples, (i) => shareOf(i) >= from && shareOf(i) <= to),
		MOST_SAMPLES
	);
	if (within.input.length < 4) return null;
	const fit = fitCurve(
		([gamma]) => residualsOf([gamma, curve.dead, curve.saturation, curve.top, curve.hysteresis], within),
		[{ start: curve.gamma, least: 0.05, most: 8 }]
	);
	return { gamma: fit.values[0], se: fit.standardErrors[0], degreesOfFreedom: fit.degreesOfFreedom };
}

/** A dead zone or a saturation that lowers the sum of squares by less than chance does in one of a hundred is none (χ², one degree). */
const CHANCE = 6.63;

/** The fit without dead zone or early saturation, where the sweep shows none. */
function simplest(samples: SweepSamples, options: FitOptions, found: CurveFit, noise: number): CurveFit {
	const reach = samples.input.reduce((most, value) => Math.max(most, value), 0);
	const limit = found.squares * (1 + CHANCE / Math.max(1, found.degreesOfFreedom));
	let best = found;
	const tries: Pick<Near, 'dead' | 'saturation'>[] = options.partial
		? [{ dead: 0 }]
		: [{ dead: 0, saturation: reach }, { saturation: reach }, { dead: 0 }];
	for (const held of tries) {
		const fit = bestFit(samples, options, { values: found.values, noise, ...held });
		if (fit.squares > limit) continue;
		best = fit;
		break;
	}
	return best;
}

interface Near {
	/** kept there */
	dead?: number;
	saturation?: number;
	values: readonly number[];
	/** spread of the output, where the device's own limits cut it off */
	noise?: number;
}

function bestFit(samples: SweepSamples, options: FitOptions, near?: Near): CurveFit {
	const { partial, knownTop, bothWays } = options;
	const top = samples.output.reduce((most, value) => Math.max(most, value), 0);
	// a curve that rises beyond what the device can show would pass for a saturation
	const { high } = cutAt(samples.output);
	const mostTop = Number.isFinite(high) ? high : 1.3 * top;
	const dead = deadStart(samples, top);
	const reach = samples.input.reduce((most, value) => Math.max(most, value), 0);
	const full = partial ? Math.max(1.5, 1.5 * reach) : reach;
	const attempt = (gamma: number, deadZone: number, saturation: number, hysteresis: number, topStart: number) => {
		const parameters: CurveParameter[] = [
			{ start: gamma, least: 0.05, most: 8 },
			{ start: near?.dead ?? deadZone, least: 0, most: 0.6 * reach, fixed: near?.dead !== undefined },
			partial && !knownTop
				? { start: 1, least: 1, most: 1, fixed: true }
				: {
						start: near?.saturation ?? saturation,
						least: 0.3 * reach,
						most: partial ? 3 * full : reach,
						fixed: near?.saturation !== undefined
					},
			partial && knownTop
				? { start: 1, least: 1, most: 1, fixed: true }
				: { start: topStart, least: 0.3 * top, most: partial ? 40 * top + 1 : mostTop },
			{ start: hysteresis, least: -0.1, most: 0.3, fixed: !bothWays }
		];
		return fitCurve((values) => residualsOf(values, samples, near?.noise), parameters);
	};
	if (near) {
		const [gamma, deadZone, saturation, topStart, hysteresis] = near.values;
		return attempt(gamma, deadZone, saturation, hysteresis, topStart);
	}
	const plateau = plateauStart(samples, top);
	let best: CurveFit | null = null;
	for (const gamma of GAMMA_STARTS) {
		for (const deadZone of dead > 0.01 ? [0, dead] : [dead]) {
			for (const saturation of partial ? [full] : plateau < 0.99 * reach ? [plateau, reach] : [reach]) {
				const topStart = partial ? top / Math.min(1, reach) ** gamma : top;
				const fit = attempt(gamma, deadZone, saturation, 0, topStart);
				if (!best || fit.squares < best.squares) best = fit;
			}
		}
	}
	if (!best) throw new RangeError('fitPedal requires a start');
	return best;
}

/** Largest input of those whose outputs are all near rest. */
function deadStart({ input, output }: SweepSamples, top: number): number {
	let first = Infinity;
	for (let i = 0; i < input.length; i++) if (output[i] > 0.03 * top) first = Math.min(first, input[i]);
	return Number.isFinite(first) ? Math.max(0, 0.9 * first) : 0;
}

/** Smallest input of those whose outputs are all near full. */
function plateauStart({ input, output }: SweepSamples, top: number): number {
	let last = -Infinity;
	for (let i = 0; i < input.length; i++) if (output[i] < 0.98 * top) last = Math.max(last, input[i]);
	return last;
}

function curveOf([gamma, dead, saturation, top, hysteresis]: readonly number[]): PedalCurve {
	return { gamma, dead, saturation, top, hysteresis };
}

function residualsOf(values: readonly number[], { input, output, direction }: SweepSamples, noise = 0): Float64Array {
	const curve = curveOf(values);
	const cut = noise > 0 ? cutAt(output) : null;
	return output.map((value, i) => {
		const exact = pedalOutput(curve, input[i] + (direction[i] < 0 ? curve.hysteresis : 0));
		return value - (cut ? cutMean(exact, noise, cut) : exact);
	});
}

interface Cut {
	low: number;
	high: number;
}

/** Where a device holds its output within limits, many samples stand exactly there. */
function cutAt(output: Float64Array): Cut {
	let [low, high] = [Infinity, -Infinity];
	for (const value of output) [low, high] = [Math.min(low, value), Math.max(high, value)];
	let [atLow, atHigh] = [0, 0];
	for (const value of output) {
		if (value === low) atLow++;
		if (value === high) atHigh++;
	}
	return { low: atLow >= 3 ? low : -Infinity, high: atHigh >= 3 ? high : Infinity };
}

/** Mean of a normal value of which only what lies within the limits is shown: noise at a limit can only point inwards. */
function cutMean(mean: number, sd: number, { low, high }: Cut): number {
	return mean - beyond((mean - high) / sd) * sd + beyond((low - mean) / sd) * sd;
}

/** Mean excess E[max(0, Z + z)] of a standard normal Z: φ(z) + z·Φ(z). */
function beyond(z: number): number {
	if (z < -6) return 0;
	return Math.exp((-z * z) / 2) / Math.sqrt(2 * Math.PI) + (z * (1 + errorFunction(z / Math.SQRT2))) / 2;
}

function select(samples: SweepSamples, keep: (i: number) => boolean): SweepSamples {
	const kept = Array.from(samples.input.keys()).filter(keep);
	return {
		input: Float64Array.from(kept, (i) => samples.input[i]),
		output: Float64Array.from(kept, (i) => samples.output[i]),
		direction: Int8Array.from(kept, (i) => samples.direction[i])
	};
}

const without = (samples: SweepSamples, kept: Float64Array) => select(samples, (i) => !Number.isNaN(kept[i]));

/** Averages of neighbours of one direction. */
function thin(samples: SweepSamples, most: number): SweepSamples {
	const n = samples.input.length;
	const group = Math.ceil(n / most);
	if (group <= 1) return samples;
	const input: number[] = [];
	const output: number[] = [];
	const direction: number[] = [];
	for (let from = 0; from < n;) {
		let to = from;
		let [sumIn, sumOut] = [0, 0];
		for (; to < n && to < from + group && samples.direction[to] === samples.direction[from]; to++) {
			sumIn += samples.input[to];
			sumOut += samples.output[to];
		}
		input.push(sumIn / (to - from));
		output.push(sumOut / (to - from));
		direction.push(samples.direction[from]);
		from = to;
	}
	return {
		input: Float64Array.from(input),
		output: Float64Array.from(output),
		direction: Int8Array.from(direction)
	};
}
