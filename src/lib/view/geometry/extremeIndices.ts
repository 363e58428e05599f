/**
 * The points of a line that a drawing can show: the first, lowest, highest and last entry of each pixel column. Where points
 * exceed pixels, the drawn line covers the same pixels as all points would, and no peak is lost.
 * Source: Jugel et al., "M4: a visualization-oriented time series data aggregation", VLDB 7 (2014) 797–808, from memory.
 *
 * @param xs        increasing
 * @param ys        same length; an entry that is not finite is kept once a run, for it breaks the line
 * @param unitsPerPx width of a pixel column in units of x, > 0
 * @returns increasing indices; all of them where there are no more than four a column
 * @throws {RangeError} if `unitsPerPx` is not > 0
 */
export function extremeIndices(xs: ArrayLike<number>, ys: ArrayLike<number>, unitsPerPx: number): number[] {
	if (!(unitsPerPx > 0)) throw new RangeError(`extremeIndices requires unitsPerPx > 0, got ${unitsPerPx}`);
	const kept: number[] = [];
	let i = 0;
	while (i < xs.length) {
		if (!Number.isFinite(ys[i])) {
			kept.push(i);
			while (i < xs.length && !Number.isFinite(ys[i])) i++;
			continue;
		}
		const column = Math.floor(xs[i] / unitsPerPx);
		const first = i;
		let low = i;
		let high = i;
		while (i < xs.length && Number.isFinite(ys[i]) && Math.floor(xs[i] / unitsPerPx) === column) {
			if (ys[i] < ys[low]) low = i;
			if (ys[i] > ys[high]) high = i;
			i++;
		}
		kept.push(...[...new Set([first, low, high, i - 1])].sort((a, b) => a - b));
	}
	return kept;
}
