import { smoothClosed, type CentreLine } from './centreLine.ts';

/** What a car follows, on the centre line's metres: where it is, how much longer its way is, how tightly it turns. */
export interface DrivenLine {
	xM: Float64Array;
	yM: Float64Array;
	/** metres driven per metre of centre line */
	stretch: Float64Array;
	curvaturePerM: Float64Array;
}

export interface LineHabits {
	/** offsets of the line that the driver has in mind, by `calmestLine` */
	base: Float64Array;
	/** turns in this much later than that line, m */
	lateM: number;
	/** per corner: a wander of this lap, m, added at the apex */
	wanderM: number[];
}

/** How far before and after its middle a corner's wander is felt, in lengths of the corner. */
const WANDER_REACH = 0.9;

/**
 * Draws a driver's line of one lap: the line in mind, a little late or early, with the lap's own wander in each corner.
 *
 * @param road   centre line
 * @param habits line in mind and this lap's wander
 */
export function drivenLine(road: CentreLine, habits: LineHabits): DrivenLine {
	const n = road.lengthM;
	const offset = new Float64Array(n);
	for (let s = 0; s < n; s++) {
		const from = s - habits.lateM + n;
		const i = Math.floor(from);
		const [before, after] = [habits.base[i % n], habits.base[(i + 1) % n]];
		offset[s] = before + (after - before) * (from - i);
	}
	road.corners.forEach((corner, i) => {
		const sigma = (corner.endM - corner.startM) * WANDER_REACH;
		for (let s = Math.ceil(corner.apexM - 3 * sigma); s <= corner.apexM + 3 * sigma; s++) {
			if (s < 0 || s >= n) continue;
			offset[s] += (habits.wanderM[i] ?? 0) * Math.exp(-(((s - corner.apexM) / sigma) ** 2) / 2);
		}
	});
	const xM = road.xM.map((x, i) => x + road.normalX[i] * offset[i]);
	const yM = road.yM.map((y, i) => y + road.normalY[i] * offset[i]);
	const stretch = new Float64Array(n);
	const heading = new Float64Array(n);
	for (let i = 0; i < n; i++) {
		const dx = (xM[(i + 1) % n] - xM[(i + n - 1) % n]) / 2;
		const dy = (yM[(i + 1) % n] - yM[(i + n - 1) % n]) / 2;
		stretch[i] = Math.hypot(dx, dy);
		heading[i] = Math.atan2(dy, dx);
	}
	const turning = new Float64Array(n);
	for (let i = 0; i < n; i++) {
		let turn = heading[(i + 1) % n] - heading[(i + n - 1) % n];
		turn -= 2 * Math.PI * Math.round(turn / (2 * Math.PI));
		turning[i] = turn / 2 / stretch[i];
	}
	return { xM, yM, stretch, curvaturePerM: smoothClosed(turning, 2) };
}
