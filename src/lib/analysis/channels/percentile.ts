/** Values looked at for a percentile: 20 000 pin the 99.5th down to a hundredth of a percentile rank. */
const MAX_VALUES = 20_000;

/**
 * Percentile of the finite values for which `where` holds, from at most 20 000 evenly spread samples.
 *
 * @param share 0–1
 * @returns NaN where no value qualifies
 */
export function percentile(values: ArrayLike<number>, share: number, where?: (index: number) => boolean): number {
	const stride = Math.max(1, Math.floor(values.length / MAX_VALUES));
	const chosen = new Float64Array(Math.ceil(values.length / stride));
	let count = 0;
	for (let i = 0; i < values.length; i += stride) {
		if (Number.isFinite(values[i]) && (!where || where(i))) chosen[count++] = values[i];
	}
	if (count === 0) return NaN;
	const sorted = chosen.subarray(0, count).sort();
	return sorted[Math.round(share * (count - 1))];
}

/**
 * Percentile of the ratio of two columns where `where` holds, from at most 20 000 evenly spread samples.
 *
 * @param share 0–1
 * @returns NaN where no sample qualifies
 */
export function ratioPercentile(
	numerator: Float64Array,
	denominator: Float64Array,
	share: number,
	where: (index: number) => boolean
): number {
	const stride = Math.max(1, Math.floor(numerator.length / MAX_VALUES));
	const ratios = new Float64Array(Math.ceil(numerator.length / stride));
	for (let k = 0, i = 0; i < numerator.length; k++, i += stride)
		ratios[k] = where(i) ? numerator[i] / denominator[i] : NaN;
	return percentile(ratios, share);
}

/** Share of the finite values for which `test` holds; 0 where there are none. */
export function shareOf(values: ArrayLike<number>, test: (value: number, index: number) => boolean): number {
	const stride = Math.max(1, Math.floor(values.length / MAX_VALUES));
	let count = 0;
	let passed = 0;
	for (let i = 0; i < values.length; i += stride) {
		if (!Number.isFinite(values[i])) continue;
		count++;
		if (test(values[i], i)) passed++;
	}
	return count > 0 ? passed / count : 0;
}
