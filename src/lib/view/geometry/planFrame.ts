/** Puts metres of the circuit on pixels of a drawing: turned, scaled evenly, fitted. */
export interface PlanFrame {
	widthPx: number;
	heightPx: number;
	pxPerM: number;
	/** metres → px, y downwards */
	place: (x: number, y: number) => [number, number];
	/** a direction in metres → unit direction in px */
	turn: (x: number, y: number) => [number, number];
}

export interface PlanFrameInput {
	/** what must fit, m */
	points: readonly { x: number; y: number }[];
	/** rad, counter-clockwise: what the drawing is turned by */
	rotation: number;
	widthPx: number;
	/** the drawing is as high as it needs, within these */
	heightPx: [number, number];
	/** px: top, right, bottom, left */
	padding: [number, number, number, number];
	/** a short stretch is not blown up beyond this */
	mostPxPerM: number;
	/** 0 puts spare width to the right, 1 to the left */
	lean?: number;
}

/**
 * Fits points into a drawing of fixed width. One point, or none, gives a drawing of the least height with the point amid it.
 */
export function planFrame({
	points,
	rotation,
	widthPx,
	heightPx,
	padding,
	mostPxPerM,
	lean = 0.5
}: PlanFrameInput): PlanFrame {
	const cos = Math.cos(rotation);
	const sin = Math.sin(rotation);
	const turned = (x: number, y: number): [number, number] => [x * cos - y * sin, -(x * sin + y * cos)];
	let [left, top, right, bottom] = [Infinity, Infinity, -Infinity, -Infinity];
	for (const point of points) {
		const [x, y] = turned(point.x, point.y);
		left = Math.min(left, x);
		right = Math.max(right, x);
		top = Math.min(top, y);
		bottom = Math.max(bottom, y);
	}
	if (left > right) [left, top, right, bottom] = [0, 0, 0, 0];
	const roomX = widthPx - padding[1] - padding[3];
	const roomY = heightPx[1] - padding[0] - padding[2];
	const pxPerM = Math.min(mostPxPerM, roomX / Math.max(right - left, 1e-9), roomY / Math.max(bottom - top, 1e-9));
	const needed = (bottom - top) * pxPerM + padding[0] + padding[2];
	const height = Math.round(Math.min(heightPx[1], Math.max(heightPx[0], needed)));
	const shiftX = padding[3] + (roomX - (right - left) * pxPerM) * lean - left * pxPerM;
	const spareY = height - padding[0] - padding[2] - (bottom - top) * pxPerM;
	const shiftY = padding[0] + spareY / 2 - top * pxPerM;
	return {
		widthPx,
		heightPx: height,
		pxPerM,
		place: (x, y) => {
			const [tx, ty] = turned(x, y);
			return [tx * pxPerM + shiftX, ty * pxPerM + shiftY];
		},
		turn: (x, y) => {
			const [tx, ty] = turned(x, y);
			const length = Math.hypot(tx, ty) || 1;
			return [tx / length, ty / length];
		}
	};
}
