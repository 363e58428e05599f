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
	/** half of the width used, m */
	widthM: number;
	/** how late the apex is, 0–1 of the arc; 0.5 is its middle */
	apexAt: number;
	/** per corner: a wander of this lap, m, added at the apex */
	wanderM: number[];
}

/**
 * Draws a driver's line: outside, apex, outside, with cosine passages between and the lap's own wander on top.
 *
 * @param road   centre line
 * @param habits how wide, how late, and this lap's wander per corner
 */
export function drivenLine(road: CentreLine, habits: LineHabits): DrivenLine {
	const n = road.lengthM;
	const nodes: { s: number; offset: number }[] = [];
	road.corners.forEach((corner, i) => {
		const length = corner.endM - corner.startM;
		const wander = habits.wanderM[i] ?? 0;
		nodes.push(
			{ s: corner.startM - 14, offset: -corner.sign * habits.widthM },
			{ s: corner.startM + length * habits.apexAt, offset: corner.sign * (habits.widthM + 0.3) + wander },
			{ s: corner.endM + 14, offset: -corner.sign * habits.widthM * 0.95 }
		);
	});
	nodes.sort((a, b) => a.s - b.s);
	const merged: { s: number; offset: number }[] = [];
	for (const node of nodes) {
		const last = merged[merged.length - 1];
		if (last && node.s - last.s < 16) {
			last.s = (last.s + node.s) / 2;
			last.offset = (last.offset + node.offset) / 2;
		} else merged.push({ ...node });
	}
	const raw = new Float64Array(n);
	for (let s = 0; s < n; s++) {
		let k = merged.findIndex((node) => node.s > s);
		const next = k === -1 ? { s: merged[0].s + n, offset: merged[0].offset } : merged[k];
		if (k === -1) k = merged.length;
		const last = merged[merged.length - 1];
		const from = k === 0 ? { s: last.s - n, offset: last.offset } : merged[k - 1];
		const f = (s - from.s) / (next.s - from.s);
		raw[s] = from.offset + ((next.offset - from.offset) * (1 - Math.cos(Math.PI * f))) / 2;
	}
	const offset = smoothClosed(raw, n < 1200 ? 4 : 7);
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
