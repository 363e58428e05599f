import { median } from './quantile.ts';

/** Ratio of standard deviation to median absolute deviation for normal values: 1 / Φ⁻¹(3/4). */
const SD_PER_MAD = 1.4826022185056018;

/**
 * Spread of values that a few wild ones do not move: median absolute deviation, scaled so that it is the standard deviation for
 * normal values.
 *
 * @param values any order; NaN entries are left out
 * @returns ≥ 0; NaN where nothing is known
 */
export function robustSpread(values: ArrayLike<number>): number {
	const middle = median(values);
	return SD_PER_MAD * median(Float64Array.from(values, (value) => Math.abs(value - middle)));
}
