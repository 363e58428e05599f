import { keepIndices } from './keepIndices.ts';

/**
 * A CSS `polygon()` in percent for the area between a curve and a level, so that the area stretches with its box while the hatch
 * inside keeps its angle and pitch.
 *
 * @param xs        0–1 across the box, increasing
 * @param ys        0–1 down the box, same length, finite
 * @param level     0–1 down the box
 * @param tolerance share of the box that a dropped point may be off
 */
export function polygonClip(xs: readonly number[], ys: readonly number[], level: number, tolerance = 0.002): string {
	const percent = (value: number): string => `${Math.round(value * 1e4) / 100}%`;
	const kept = keepIndices(xs, ys, tolerance);
	const points = kept.map((i) => `${percent(xs[i])} ${percent(ys[i])}`);
	const first = percent(xs[kept[0]]);
	const last = percent(xs[kept[kept.length - 1]]);
	return `polygon(${[...points, `${last} ${percent(level)}`, `${first} ${percent(level)}`].join(',')})`;
}
