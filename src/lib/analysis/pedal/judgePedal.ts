import type { PedalDocument, PedalHalf, PedalReason, PedalVerdict, PedalWarning } from '../../schemas/pedalDocument.ts';
import { median } from '../stats/quantile.ts';
import { robustSpread } from '../stats/robustSpread.ts';
import { t95 } from '../stats/studentT.ts';
import { fitGammaWithin, fitPedal, type PedalFit, type SweepSamples } from './fitPedal.ts';
import { powerDeparture, type PedalCurve } from './pedalCurve.ts';
import { drift, restShare } from './restLevel.ts';

export interface JudgedSweep {
	input: ScaleOf;
	output: ScaleOf;
	samples: SweepSamples;
	sweeps: number;
	warnings: readonly PedalWarning[];
}

interface ScaleOf {
	header: string;
	unit: string;
	full: number;
	/** false: the largest value seen stands in */
	known: boolean;
}

/** An input or output that reaches this share of full was swept to the end. */
const FULL_REACHED = 0.97;
/** Half-width of the interval of γ beyond which nothing is said; a partial sweep has to be better to be believed. */
const MOST_HALF_WIDTH = 0.15;
const MOST_HALF_WIDTH_PARTIAL = 0.05;
/** A departure up to this is straight: % of output. */
const STRAIGHT_PCT = 1;
/** Means of the residuals over the travel beyond this are no noise: the curve is no power of the input. */
const MOST_MISFIT = 0.015;
/** Curvature needs points: fewer different inputs than this cannot tell γ, dead zone and saturation apart. */
const LEAST_POINTS = 6;
const BINS = 25;

/** Judges a sweep with a known input. */
export function judgePedal(sweep: JudgedSweep): PedalDocument {
	const { samples } = sweep;
	const reasons: PedalDocument['reasons'] = {};
	const warnings: PedalWarning[] = [...sweep.warnings];
	const most = samples.output.reduce((top, value) => Math.max(top, value), 0);
	const rest = restShare(samples.output);
	const points = new Set(samples.input).size;
	if (!(most > 0.02) || points < LEAST_POINTS)
		return nothingTold(sweep, most > 0.02 ? 'too_few_points' : 'no_output', warnings);
	const partial = isPartial(sweep, most);
	const bothWays = [1, -1].every((way) => samples.direction.filter((one) => one === way).length >= 5);
	const fit = fitPedal(samples, { partial, knownTop: sweep.output.known, bothWays });
	if (fit.outliers > 0) warnings.push('outliers');
	const { curve } = fit;
	const noise = Math.max(0, robustSpread(fit.residuals.filter((value) => !Number.isNaN(value))));
	const halfWidth = t95(Math.max(1, fit.degreesOfFreedom)) * fit.gammaSe;
	const misfit = misfitOf(samples, fit);
	const gammaReason: PedalReason | null =
		misfit > MOST_MISFIT
			? 'not_a_power_curve'
			: partial && !(halfWidth <= MOST_HALF_WIDTH_PARTIAL)
				? 'partial_sweep'
				: !(halfWidth <= MOST_HALF_WIDTH)
					? 'too_noisy'
					: null;
	const told = gammaReason === null;
	if (gammaReason) reasons.gamma = reasons.gammaCi95 = gammaReason;

	const departure = told ? powerDeparture(curve.gamma) : partial ? null : measuredDeparture(samples, curve);
	if (!told && partial) reasons.largestDeparturePct = reasons.departureAtInput = 'partial_sweep';
	else if (!departure || Math.abs(departure.size) < 5e-4) reasons.departureAtInput = 'no_departure';
	const departurePct = departure ? 100 * departure.size : told ? 0 : null;
	if (partial) reasons.saturationPct = 'partial_sweep';
	if (!bothWays) reasons.hysteresisPct = 'one_direction';
	const verdict = told ? verdictOf(curve.gamma, halfWidth) : measuredVerdict(departurePct, gammaReason);
	if (verdict === 'unknown' && gammaReason) reasons.verdict = gammaReason;
	return {
		schema: 'kerbnote.pedal/1',
		gamma: told ? curve.gamma : null,
		gammaCi95: told ? [curve.gamma - halfWidth, curve.gamma + halfWidth] : null,
		deadZonePct: 100 * curve.dead,
		saturationPct: partial ? null : 100 * curve.saturation,
		largestDeparturePct: departurePct,
		departureAtInput: reasons.departureAtInput ? null : (departure?.at ?? null),
		hysteresisPct: bothWays ? 100 * curve.hysteresis : null,
		verdict,
		reasons,
		halves: partial ? [] : halvesOf(samples, curve),
		noisePct: 100 * noise,
		driftPct: 100 * drift(samples.output, rest, noise),
		sweeps: sweep.sweeps,
		samples: samples.input.length,
		input: { header: sweep.input.header, unit: sweep.input.unit, full: sweep.input.full },
		output: {
			header: sweep.output.header,
			unit: sweep.output.unit,
			full: sweep.output.known ? sweep.output.full : null
		},
		warnings
	};
}

/** Neither end is seen: the input stops early, and the output neither stands still nor is full. */
function isPartial({ input, output, samples }: JudgedSweep, most: number): boolean {
	const reach = samples.input.reduce((top, value) => Math.max(top, value), 0);
	if (output.known && most >= FULL_REACHED) return false;
	if (plateauLength(samples, most, reach) > 0.03 * reach) return false;
	if (input.known) return reach < FULL_REACHED;
	return output.known;
}

/** Range of inputs at the top over which the output no longer grows. */
function plateauLength({ input, output }: SweepSamples, most: number, reach: number): number {
	let last = 0;
	for (let i = 0; i < input.length; i++) if (output[i] < 0.985 * most) last = Math.max(last, input[i]);
	return reach - last - 0.015 * reach;
}

/** Root mean square of the residuals' means over the travel, pressing and releasing apart. */
function misfitOf({ input, direction }: SweepSamples, { residuals, curve }: PedalFit): number {
	let squares = 0;
	let count = 0;
	for (const way of [1, -1]) {
		const bins = Array.from({ length: BINS }, (): number[] => []);
		residuals.forEach((value, i) => {
			const share = (input[i] - curve.dead) / (curve.saturation - curve.dead);
			if (Number.isNaN(value) || direction[i] !== way || share < 0 || share >= 1) return;
			bins[Math.floor(share * BINS)].push(value);
		});
		for (const bin of bins) {
			if (bin.length === 0) continue;
			const mean = bin.reduce((sum, value) => sum + value, 0) / bin.length;
			const noise = robustSpread(bin) / Math.sqrt(bin.length);
			squares += Math.max(0, mean * mean - noise * noise);
			count++;
		}
	}
	return count === 0 ? 0 : Math.sqrt(squares / count);
}

/** Largest difference to the straight line as measured while pressing, for curves of another shape. */
function measuredDeparture(
	{ input, output, direction }: SweepSamples,
	curve: PedalCurve
): { at: number; size: number } | null {
	const bins = Array.from({ length: 2 * BINS }, (): number[] => []);
	output.forEach((value, i) => {
		const share = (input[i] - curve.dead) / (curve.saturation - curve.dead);
		if (direction[i] >= 0 && share >= 0 && share < 1)
			bins[Math.floor(share * bins.length)].push(value / curve.top - share);
	});
	let best: { at: number; size: number } | null = null;
	bins.forEach((bin, b) => {
		if (bin.length === 0) return;
		const size = median(bin);
		if (!best || Math.abs(size) > Math.abs(best.size)) best = { at: (b + 0.5) / bins.length, size };
	});
	return best;
}

function halvesOf(samples: SweepSamples, curve: PedalCurve): PedalHalf[] {
	return [
		[0.01, 0.5],
		[0.5, 1]
	].map(([from, to]) => {
		const fit = fitGammaWithin(samples, curve, from, to);
		const halfWidth = fit ? t95(Math.max(1, fit.degreesOfFreedom)) * (Number.isNaN(fit.se) ? 0 : fit.se) : NaN;
		const departure = fit && powerDeparture(fit.gamma);
		const within = departure && departure.at >= from && departure.at <= to;
		const border = fit ? 0.5 ** fit.gamma - 0.5 : NaN;
		return {
			fromPct: 100 * from,
			toPct: 100 * to,
			gamma: fit?.gamma ?? null,
			gammaCi95: fit ? [fit.gamma - halfWidth, fit.gamma + halfWidth] : null,
			largestDeparturePct: fit ? 100 * (departure ? (within ? departure.size : border) : 0) : null,
			verdict: fit ? verdictOf(fit.gamma, halfWidth) : 'unknown'
		};
	});
}

/** Straight up to a departure of 1 % of the output, or where the interval holds 1 and reaches no further than 3 %. */
function verdictOf(gamma: number, halfWidth: number): PedalVerdict {
	const departurePct = 100 * (powerDeparture(gamma)?.size ?? 0);
	const holdsOne = Math.abs(gamma - 1) <= halfWidth;
	if (Math.abs(departurePct) <= STRAIGHT_PCT || (holdsOne && Math.abs(departurePct) <= 3 * STRAIGHT_PCT))
		return 'linear';
	return gamma > 1 ? 'progressive' : 'degressive';
}

function measuredVerdict(departurePct: number | null, reason: PedalReason): PedalVerdict {
	if (departurePct === null || reason !== 'not_a_power_curve') return 'unknown';
	if (Math.abs(departurePct) <= STRAIGHT_PCT) return 'linear';
	return departurePct < 0 ? 'progressive' : 'degressive';
}

function nothingTold(sweep: JudgedSweep, reason: PedalReason, warnings: PedalWarning[]): PedalDocument {
	const none = {
		gamma: null,
		gammaCi95: null,
		deadZonePct: null,
		saturationPct: null,
		largestDeparturePct: null,
		departureAtInput: null,
		hysteresisPct: null
	};
	const reasons: PedalDocument['reasons'] = {};
	for (const field of [...Object.keys(none), 'verdict']) reasons[field] = reason;
	return {
		schema: 'kerbnote.pedal/1',
		...none,
		verdict: 'unknown',
		reasons,
		halves: [],
		noisePct: null,
		driftPct: null,
		sweeps: sweep.sweeps,
		samples: sweep.samples.input.length,
		input: { header: sweep.input.header, unit: sweep.input.unit, full: sweep.input.full },
		output: {
			header: sweep.output.header,
			unit: sweep.output.unit,
			full: sweep.output.known ? sweep.output.full : null
		},
		warnings
	};
}
