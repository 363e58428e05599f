/**
 * Quantile of the values that are known, by linear interpolation between order statistics (type 7, as numpy and R do by default).
 *
 * @param values any order; NaN entries are left out
 * @param share  0 … 1
 * @returns NaN where nothing is known
 * @example quantile([4, 1, NaN, 3, 2], 0.5) // => 2.5
 */
export function quantile(values: ArrayLike<number>, share: number): number {
	if (!(share >= 0 && share <= 1)) throw new RangeError(`quantile requires a share of 0 to 1, got ${share}`);
	const known = new Float64Array(values.length);
	let count = 0;
	for (let i = 0; i < values.length; i++) if (values[i] === values[i]) known[count++] = values[i];
	if (count === 0) return NaN;
	// typed arrays sort numbers as numbers, and an order of magnitude faster than a plain array
	const sorted = known.subarray(0, count).sort();
	const at = (count - 1) * share;
	const low = Math.floor(at);
	const high = Math.min(low + 1, count - 1);
	return sorted[low] + (sorted[high] - sorted[low]) * (at - low);
}

/** Middle value of those that are known; NaN where nothing is known. */
export function median(values: ArrayLike<number>): number {
	return quantile(values, 0.5);
}
