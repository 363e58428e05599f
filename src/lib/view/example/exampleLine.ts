import { smoothClosed, type CentreLine } from '../../demo/centreLine.ts';

/** A car's way along the centre line's metres. */
export interface ExampleLine {
	/** from the centre line, left positive */
	offsetM: Float64Array;
	curvaturePerM: Float64Array;
}

/**
 * Outside, apex, outside, with cosine passages between: a textbook line by closed form.
 *
 * @param widthM half of the width used
 * @param apexAt how late the apex is, 0–1 of the arc
 */
export function exampleLine(road: CentreLine, widthM: number, apexAt: number): ExampleLine {
	const n = road.lengthM;
	const nodes = road.corners
		.flatMap(({ startM, endM, sign }) => [
			{ s: startM - 14, offset: -sign * widthM },
			{ s: startM + (endM - startM) * apexAt, offset: sign * (widthM + 0.3) },
			{ s: endM + 14, offset: -sign * widthM }
		])
		.map((node) => ({ ...node, s: ((node.s % n) + n) % n }))
		.sort((a, b) => a.s - b.s);
	const raw = new Float64Array(n);
	for (let s = 0; s < n; s++) {
		const after = nodes.findIndex((node) => node.s > s);
		const to = after < 0 ? { ...nodes[0], s: nodes[0].s + n } : nodes[after];
		const before = nodes[(after < 0 ? nodes.length : after) - 1] ?? {
			...nodes[nodes.length - 1],
			s: nodes[nodes.length - 1].s - n
		};
		const share = to.s > before.s ? (s - before.s) / (to.s - before.s) : 0;
		raw[s] = before.offset + ((to.offset - before.offset) * (1 - Math.cos(Math.PI * share))) / 2;
	}
	const offsetM = smoothClosed(raw, 7);
	const x = road.xM.map((value, i) => value + road.normalX[i] * offsetM[i]);
	const y = road.yM.map((value, i) => value + road.normalY[i] * offsetM[i]);
	const bent = x.map((_, i) => {
		const [a, b] = [(i + n - 1) % n, (i + 1) % n];
		const [ux, uy, vx, vy] = [x[i] - x[a], y[i] - y[a], x[b] - x[i], y[b] - y[i]];
		return Math.atan2(ux * vy - uy * vx, ux * vx + uy * vy) / Math.hypot(vx, vy);
	});
	return { offsetM, curvaturePerM: smoothClosed(bent, 2) };
}
