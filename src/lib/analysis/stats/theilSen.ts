import { median } from './quantile.ts';

export interface RobustLine {
	slope: number;
	intercept: number;
}

/**
 * Line through points that a third of wild ones does not move: median of the slopes between all pairs with different x,
 * intercept median(y) − slope · median(x). Theil 1950, Sen 1968; the intercept as in scipy.stats.theilslopes (Conover). O(n²).
 *
 * @param x, y  same length; pairs with an unknown value are left out
 * @returns null with fewer than two different x
 */
export function theilSen(x: ArrayLike<number>, y: ArrayLike<number>): RobustLine | null {
	const known: number[] = [];
	for (let i = 0; i < x.length; i++) if (Number.isFinite(x[i]) && Number.isFinite(y[i])) known.push(i);
	const slopes: number[] = [];
	for (let i = 0; i < known.length; i++) {
		for (let j = i + 1; j < known.length; j++) {
			const run = x[known[j]] - x[known[i]];
			if (run !== 0) slopes.push((y[known[j]] - y[known[i]]) / run);
		}
	}
	if (slopes.length === 0) return null;
	const slope = median(slopes);
	const intercept = median(known.map((i) => y[i])) - slope * median(known.map((i) => x[i]));
	return { slope, intercept };
}
