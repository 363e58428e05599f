import { CompactPath } from './CompactPath.ts';

export interface RibbonPoint {
	x: number;
	y: number;
	/** full width at this point, > 0 */
	width: number;
}

/**
 * A line that swells: the closed outline of a stroke whose width changes along it, as brake pressure in the plan.
 *
 * @param points in order along the line; fewer than two draw nothing
 */
export function ribbonPath(points: readonly RibbonPoint[]): string {
	if (points.length < 2) return '';
	const path = new CompactPath();
	const edge = (i: number, side: 1 | -1): [number, number] => {
		const before = points[Math.max(0, i - 1)];
		const after = points[Math.min(points.length - 1, i + 1)];
		const dx = after.x - before.x;
		const dy = after.y - before.y;
		const length = Math.hypot(dx, dy) || 1;
		const half = (side * points[i].width) / 2;
		return [points[i].x - (dy / length) * half, points[i].y + (dx / length) * half];
	};
	path.moveTo(...edge(0, 1));
	for (let i = 1; i < points.length; i++) path.lineTo(...edge(i, 1));
	for (let i = points.length - 1; i >= 0; i--) path.lineTo(...edge(i, -1));
	path.closePath();
	return path.toString();
}
