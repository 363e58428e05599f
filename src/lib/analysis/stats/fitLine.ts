import { leastSquares } from './leastSquares.ts';
import { t95 } from './studentT.ts';

export interface LineFit {
	n: number;
	slope: number;
	/** at x = 0 */
	intercept: number;
	slopeSe: number;
	/** 95 %, Student t with n − 2 degrees of freedom */
	slopeCi95: [number, number];
	/** √(Σ residual² / (n − 2)) */
	residualSd: number;
	meanX: number;
	/** Σ (x − mean)² */
	spreadX: number;
}

/**
 * Ordinary least squares line with standard error, as scipy.stats.linregress gives it: x is centred first, so that lap 2 000 costs no digits.
 *
 * @param x, y same length, all finite
 * @returns null with fewer than three points or fewer than two different x: two points have no error to show
 */
export function fitLine(x: readonly number[], y: readonly number[]): LineFit | null {
	const n = x.length;
	if (n < 3) return null;
	const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / n;
	const meanX = mean(x);
	const centred = x.map((value) => value - meanX);
	const fit = leastSquares([new Float64Array(n).fill(1), centred], y);
	if (!fit) return null;
	const slope = fit.coefficients[1];
	const slopeSe = fit.standardErrors[1];
	const reach = t95(n - 2) * slopeSe;
	return {
		n,
		slope,
		intercept: fit.coefficients[0] - slope * meanX,
		slopeSe,
		slopeCi95: [slope - reach, slope + reach],
		residualSd: fit.residualSd,
		meanX,
		spreadX: centred.reduce((sum, value) => sum + value * value, 0)
	};
}
