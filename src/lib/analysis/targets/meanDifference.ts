import { mean, sampleVariance } from 'simple-statistics';
import { t95 } from '../stats/studentT.ts';

/**
 * Difference of two means with its 95 % interval, without the assumption that both spread alike.
 *
 * Source: B. L. Welch (1947), "The generalization of Student's problem when several different population variances are involved",
 * with the degrees of freedom of Satterthwaite.
 *
 * @returns null where a side has fewer than two values
 */
export function meanDifference(
	first: readonly number[],
	second: readonly number[]
): { differenceS: number; low: number; high: number } | null {
	if (first.length < 2 || second.length < 2) return null;
	const differenceS = mean([...first]) - mean([...second]);
	const [a, b] = [first, second].map((values) => sampleVariance([...values]) / values.length);
	const variance = a + b;
	if (!(variance > 0)) return { differenceS, low: differenceS, high: differenceS };
	const degreesOfFreedom = variance ** 2 / (a ** 2 / (first.length - 1) + b ** 2 / (second.length - 1));
	const halfWidth = t95(degreesOfFreedom) * Math.sqrt(variance);
	return { differenceS, low: differenceS - halfWidth, high: differenceS + halfWidth };
}
