import type { PlanView } from '$lib/view/planView';
import { UNITS_PER_PX } from '$lib/view/geometry/units';

/** Steps of a plan's line summed up again: px by entry, NaN in a gap. Done once a card, not once a frame. */
export function trackPoints(steps: readonly (number | null)[]): Float64Array {
	const points = new Float64Array(steps.length);
	let x = 0;
	let y = 0;
	for (let i = 0; i + 1 < steps.length; i += 2) {
		const dx = steps[i];
		const dy = steps[i + 1];
		if (dx === null || dy === null) {
			points[i] = points[i + 1] = NaN;
			continue;
		}
		x += dx;
		y += dy;
		points[i] = x / UNITS_PER_PX;
		points[i + 1] = y / UNITS_PER_PX;
	}
	return points;
}

/**
 * Where a line of the plan is at a place, and its direction there: linear between the points of the track.
 *
 * @returns null outside the track and in a gap
 */
export function trackPoint(
	{ fromM, stepM }: Pick<PlanView['track'], 'fromM' | 'stepM'>,
	points: Float64Array,
	placeM: number
): { x: number; y: number; directionX: number; directionY: number } | null {
	const count = points.length / 2;
	const at = Math.min(count - 1, (placeM - fromM) / stepM);
	if (!(at >= 0) || count < 2) return null;
	const low = Math.min(count - 2, Math.floor(at));
	const share = at - low;
	const [x0, y0, x1, y1] = points.subarray(2 * low, 2 * low + 4);
	const length = Math.hypot(x1 - x0, y1 - y0);
	if (!Number.isFinite(length)) return null;
	return {
		x: x0 + (x1 - x0) * share,
		y: y0 + (y1 - y0) * share,
		directionX: length > 0 ? (x1 - x0) / length : 0,
		directionY: length > 0 ? (y1 - y0) / length : -1
	};
}
