import { t95 } from '../stats/studentT.ts';
import type { StintFit } from './stintFit.ts';

export interface PaceDifference {
	/** first minus second at that age: positive, the first is slower, s per lap */
	differenceS: number;
	ci95: [number, number];
	/** null where the interval holds zero: nobody is called quicker */
	quicker: 'first' | 'second' | null;
}

/**
 * Difference of two stints' pace at one tyre age, with a 95 % interval: standard errors of both lines there, widened where residuals
 * of laps in a row are alike (a first-order autocorrelation ρ leaves n·(1 − ρ)/(1 + ρ) laps' worth of news), degrees of
 * freedom by Welch and Satterthwaite.
 *
 * @param ageLaps laps on the tyre set, on the same count as the fits' laps
 */
export function paceDifference(first: StintFit, second: StintFit, ageLaps: number): PaceDifference {
	const differenceS = first.intercept + first.slope * ageLaps - second.intercept - second.slope * ageLaps;
	const [a, b] = [first, second].map((fit) => ({ variance: lineVariance(fit, ageLaps), free: effectiveFree(fit) }));
	const variance = a.variance + b.variance;
	const free = variance > 0 ? variance ** 2 / (a.variance ** 2 / a.free + b.variance ** 2 / b.free) : a.free + b.free;
	const reach = t95(Math.max(1, free)) * Math.sqrt(variance);
	const ci95: [number, number] = [differenceS - reach, differenceS + reach];
	const quicker = ci95[0] > 0 ? 'second' : ci95[1] < 0 ? 'first' : null;
	return { differenceS, ci95, quicker };
}

/** Only likeness widens: laps that answer each other (ρ < 0) are no reason to be surer. */
const likeness = ({ autocorrelation }: StintFit): number => Math.max(0, Math.min(0.9, autocorrelation));

function lineVariance(fit: StintFit, age: number): number {
	const rho = likeness(fit);
	const widened = fit.residualSd ** 2 * ((1 + rho) / (1 - rho));
	return widened * (1 / fit.n + (age - fit.meanX) ** 2 / fit.spreadX);
}

function effectiveFree(fit: StintFit): number {
	const rho = likeness(fit);
	return Math.max(1, (fit.n * (1 - rho)) / (1 + rho) - 2);
}
