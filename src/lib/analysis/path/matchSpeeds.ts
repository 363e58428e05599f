import { median } from '../stats/quantile.ts';

/** Grid on which speeds are held against each other, m. */
export const MATCH_STEP_M = 5;
/** A minimum counts when speed rises by this on both sides, as a share of the lap's highest speed. */
const LEAST_PROMINENCE_SHARE = 0.08;
/** Two minima are the same one when they lie this near after scaling. */
const LARGEST_SHIFT_SHARE = 0.03;
const LARGEST_SHIFT_M = 80;
/** Around a minimum, speeds are laid on each other over this way to each side. */
const WINDOW_M = 120;

/** A shift that lays a lap on a path: what is at `fromM` of the lap belongs at `toM` of the path. */
export interface Knot {
	fromM: number;
	toM: number;
}

/**
 * Lays a lap's speed on a path's: at each minimum that both have, the shift at which the speeds around it agree best. Shifts that
 * do not fit their neighbours are replaced by the median of three, because a driver who brakes earlier moves his minimum too.
 *
 * @param lapKmh  the lap's speed every 5 m of its length scaled to the path's
 * @param pathKmh the path's speed on the same grid
 * @param lengthM the path's length
 * @returns knots from (0, 0) to (lengthM, lengthM), both strictly increasing
 */
export function matchSpeeds(lapKmh: Float64Array, pathKmh: Float64Array, lengthM: number): Knot[] {
	const limit = Math.min(LARGEST_SHIFT_M, LARGEST_SHIFT_SHARE * lengthM);
	const own = minima(lapKmh);
	const known = minima(pathKmh);
	const pairs: Knot[] = [];
	for (const at of known) {
		const partner = own
			.filter((i) => Math.abs(i - at) * MATCH_STEP_M <= limit)
			.sort((a, b) => Math.abs(a - at) - Math.abs(b - at))[0];
		if (partner === undefined) continue;
		const shift = bestShift(lapKmh, pathKmh, at, Math.round(limit / MATCH_STEP_M));
		pairs.push({ fromM: at * MATCH_STEP_M - shift, toM: at * MATCH_STEP_M });
	}
	const shifts = pairs.map(({ fromM, toM }) => toM - fromM);
	const calm = shifts.map((shift, k) => median([shifts[k - 1] ?? shift, shift, shifts[k + 1] ?? shift]));
	const knots: Knot[] = [{ fromM: 0, toM: 0 }];
	pairs.forEach(({ toM }, k) => {
		const last = knots[knots.length - 1];
		const fromM = toM - calm[k];
		const slope = (toM - last.toM) / (fromM - last.fromM);
		if (slope > 0.8 && slope < 1.25 && lengthM - fromM > 1 && lengthM - toM > 1) knots.push({ fromM, toM });
	});
	knots.push({ fromM: lengthM, toM: lengthM });
	return knots;
}

/** Indices of the minima of a closed speed trace that stand out on both sides. */
function minima(speed: Float64Array): number[] {
	const n = speed.length;
	let top = 0;
	for (const value of speed) if (value > top) top = value;
	const prominence = LEAST_PROMINENCE_SHARE * top;
	const found: number[] = [];
	for (let i = 1; i + 1 < n; i++) {
		if (!(speed[i] < speed[i - 1] && speed[i] <= speed[i + 1])) continue;
		if (rises(speed, i, 1, prominence) && rises(speed, i, -1, prominence)) found.push(i);
	}
	return found;
}

/** Does the speed rise by `by` in a direction before it falls below the minimum? */
function rises(speed: Float64Array, at: number, direction: number, by: number): boolean {
	for (let i = at + direction; i >= 0 && i < speed.length; i += direction) {
		if (speed[i] < speed[at]) return false;
		if (speed[i] >= speed[at] + by) return true;
	}
	return true;
}

/** Shift of the lap, m, at which its speed around a place agrees best with the path's, apart from a constant. */
function bestShift(lap: Float64Array, path: Float64Array, at: number, reach: number): number {
	const window = Math.round(WINDOW_M / MATCH_STEP_M);
	const misfit = (shift: number) => {
		let sum = 0;
		let squares = 0;
		let count = 0;
		for (let i = Math.max(0, at - window); i <= Math.min(path.length - 1, at + window); i++) {
			const difference = path[i] - lap[i - shift];
			if (Number.isNaN(difference) || i - shift < 0 || i - shift >= lap.length) continue;
			sum += difference;
			squares += difference * difference;
			count++;
		}
		return count > window ? squares / count - (sum / count) ** 2 : Infinity;
	};
	let best = 0;
	for (let shift = -reach; shift <= reach; shift++) if (misfit(shift) < misfit(best)) best = shift;
	// the minimum of the parabola through the three misfits around the best one
	const [a, b, c] = [misfit(best - 1), misfit(best), misfit(best + 1)];
	const bend = a - 2 * b + c;
	const part = Number.isFinite(bend) && bend > 0 ? (a - c) / (2 * bend) : 0;
	return (best + part) * MATCH_STEP_M;
}
