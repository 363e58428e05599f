/**
 * Thins a line to the points that the eye can tell: the indices left by Ramer–Douglas–Peucker, first and last always among them.
 * Source: Douglas & Peucker, Cartographica 10 (1973) 112–122, from memory.
 *
 * Vertical distance stands in for the perpendicular one: lines here are functions of x, and the former is never smaller.
 *
 * @param xs        increasing
 * @param ys        same length, finite
 * @param tolerance in units of y, ≥ 0: no dropped point lies further than this from the line that is left
 */
export function keepIndices(xs: ArrayLike<number>, ys: ArrayLike<number>, tolerance: number): number[] {
	const n = xs.length;
	if (n < 3) return Array.from({ length: n }, (_, i) => i);
	const kept = new Uint8Array(n);
	kept[0] = kept[n - 1] = 1;
	const stack: [number, number][] = [[0, n - 1]];
	for (let stretch = stack.pop(); stretch; stretch = stack.pop()) {
		const [from, to] = stretch;
		const slope = (ys[to] - ys[from]) / (xs[to] - xs[from]);
		let worst = tolerance;
		let at = -1;
		for (let i = from + 1; i < to; i++) {
			const away = Math.abs(ys[i] - (ys[from] + slope * (xs[i] - xs[from])));
			if (away > worst) {
				worst = away;
				at = i;
			}
		}
		if (at < 0) continue;
		kept[at] = 1;
		stack.push([from, at], [at, to]);
	}
	return Array.from({ length: n }, (_, i) => i).filter((i) => kept[i] === 1);
}
