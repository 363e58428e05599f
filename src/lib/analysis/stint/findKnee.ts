import { leastSquares } from '../stats/leastSquares.ts';
import { studentTQuantile } from '../stats/studentT.ts';

export interface Knee {
	/** last lap of the first part */
	lap: number;
	slopeBefore: number;
	slopeAfter: number;
}

const LEAST_PART = 4;
/** How sure: the bend's place is searched, which finds one by luck more often than a fixed place would. */
const LEVEL = 0.001;
/** A bend that changes the slope by less than this share of a lap's time per lap changes no plan. */
const LEAST_BEND = 1e-4;

/**
 * Tests whether the pace bends: two lines that meet against one. A knee is claimed where the change of slope is sure beyond one in a
 * thousand, by Student's t, shared out over the places tried (Bonferroni), and matters.
 *
 * @param laps increasing
 * @returns null where one line will do, or fewer than 8 laps are there
 */
export function findKnee(laps: readonly number[], timesS: readonly number[]): Knee | null {
	const n = laps.length;
	if (n < 2 * LEAST_PART) return null;
	const ones = new Float64Array(n).fill(1);
	let best: { knee: Knee; squares: number; t: number; degreesOfFreedom: number } | null = null;
	for (let k = LEAST_PART - 1; k < n - LEAST_PART; k++) {
		const after = laps.map((lap) => Math.max(0, lap - laps[k]));
		const fit = leastSquares([ones, laps.map((lap) => lap - laps[k]), after], timesS);
		if (!fit) continue;
		const [, before, bend] = fit.coefficients;
		const squares = fit.residualSd ** 2;
		if (best && squares >= best.squares) continue;
		const t = Math.abs(bend) / fit.standardErrors[2];
		const knee = { lap: laps[k], slopeBefore: before, slopeAfter: before + bend };
		best = { knee, squares, t, degreesOfFreedom: fit.degreesOfFreedom };
	}
	if (!best || !Number.isFinite(best.t)) return null;
	const { knee, t, degreesOfFreedom } = best;
	const needed = studentTQuantile(1 - LEVEL / (2 * (n - 2 * LEAST_PART + 1)), degreesOfFreedom);
	const matters = Math.abs(knee.slopeAfter - knee.slopeBefore) > LEAST_BEND * timesS[0];
	return t > needed && matters ? knee : null;
}
