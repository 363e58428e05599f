import type { ReferencePath } from '../../analysis/model.ts';

/** A place in the plane, and the unit normal to the left of the driving direction. */
export interface PathPoint {
	x: number;
	y: number;
	normalX: number;
	normalY: number;
}

/**
 * Where a place lies: linear between the path's whole metres, the last one joined to the first on a closed layout.
 *
 * @param placeM any number on a closed path; clamped to the ends of an open one
 */
export function pathPoint(path: ReferencePath, placeM: number): PathPoint {
	const { xM, yM, lengthM, closed } = path;
	const s = closed ? placeM - Math.floor(placeM / lengthM) * lengthM : Math.min(lengthM, Math.max(0, placeM));
	const low = Math.floor(s);
	// Away from the seam the points a metre before and after share the fraction: no wrapping, no allocation.
	if (low >= 1 && low + 2 < xM.length) {
		const share = s - low;
		const dx = xM[low + 1] - xM[low - 1] + (xM[low + 2] - xM[low] - xM[low + 1] + xM[low - 1]) * share;
		const dy = yM[low + 1] - yM[low - 1] + (yM[low + 2] - yM[low] - yM[low + 1] + yM[low - 1]) * share;
		const length = Math.hypot(dx, dy) || 1;
		return {
			x: xM[low] + (xM[low + 1] - xM[low]) * share,
			y: yM[low] + (yM[low + 1] - yM[low]) * share,
			normalX: -dy / length,
			normalY: dx / length
		};
	}
	const at = position(path, placeM);
	const before = position(path, placeM - 1);
	const after = position(path, placeM + 1);
	const dx = after.x - before.x;
	const dy = after.y - before.y;
	const length = Math.hypot(dx, dy) || 1;
	return { ...at, normalX: -dy / length, normalY: dx / length };
}

function position({ xM, yM, lengthM, closed }: ReferencePath, placeM: number): { x: number; y: number } {
	const s = closed ? placeM - Math.floor(placeM / lengthM) * lengthM : Math.min(lengthM, Math.max(0, placeM));
	const last = xM.length - 1;
	const low = Math.min(last, Math.floor(s));
	const high = low < last ? low + 1 : closed ? 0 : last;
	// The closing step is as long as what is left of the lap, rarely a whole metre.
	const step = low < last ? 1 : lengthM - low;
	const share = step > 0 ? (s - low) / step : 0;
	return { x: xM[low] + (xM[high] - xM[low]) * share, y: yM[low] + (yM[high] - yM[low]) * share };
}
