import { median, quantile } from '../stats/quantile.ts';

/** Level of the output at rest: the middle of the lowest twentieth of the range. */
export function restShare(share: Float64Array): number {
	const low = quantile(share, 0);
	const limit = low + 0.05 * (quantile(share, 1) - low);
	return median(share.filter((value) => value <= limit));
}

/**
 * Change of the level at rest from the first stay to the last.
 *
 * @returns 0 where there is one stay only
 */
export function drift(share: Float64Array, rest: number, noise: number): number {
	const limit = rest + Math.max(0.02, 4 * noise);
	const stays: number[][] = [];
	let inside = false;
	for (const value of share) {
		if (value <= limit) {
			if (!inside) stays.push([]);
			stays.at(-1)?.push(value);
		}
		inside = value <= limit;
	}
	const long = stays.filter((stay) => stay.length >= 3);
	return long.length < 2 ? 0 : median(long.at(-1) ?? []) - median(long[0]);
}
