import type { DemoCircuit } from './circuits.ts';

export interface CentreLine {
	/** whole metres; entry i lies i m after the line */
	lengthM: number;
	xM: Float64Array;
	yM: Float64Array;
	/** unit normal to the left */
	normalX: Float64Array;
	normalY: Float64Array;
	corners: { name: string; startM: number; apexM: number; endM: number; sign: 1 | -1; radiusM: number }[];
}

/** Gaussian smoothing on a closed line; `sigma` in entries. */
export function smoothClosed(values: Float64Array, sigma: number): Float64Array {
	const reach = Math.ceil(sigma * 3);
	const weights = Array.from({ length: 2 * reach + 1 }, (_, k) => Math.exp(-((k - reach) ** 2) / (2 * sigma * sigma)));
	const total = weights.reduce((sum, w) => sum + w, 0);
	const n = values.length;
	return values.map((_, i) => {
		let sum = 0;
		for (let k = -reach; k <= reach; k++) sum += weights[k + reach] * values[(i + k + n) % n];
		return sum / total;
	});
}

/**
 * Rounds the polygon of a circuit's straights into a centre line on a 1 m grid, with short transitions.
 *
 * @param circuit vertices in driving order; the line from the last to the first passes through (0, 0)
 */
export function centreLine(circuit: DemoCircuit): CentreLine {
	const points: [number, number][] = [[0, 0]];
	const arcs: { name: string; from: number; to: number; sign: 1 | -1; radiusM: number }[] = [];
	const n = circuit.vertices.length;
	circuit.vertices.forEach((vertex, i) => {
		const before = circuit.vertices[(i + n - 1) % n];
		const after = circuit.vertices[(i + 1) % n];
		const inX = vertex.xM - before.xM;
		const inY = vertex.yM - before.yM;
		const outX = after.xM - vertex.xM;
		const outY = after.yM - vertex.yM;
		const inLength = Math.hypot(inX, inY);
		const turn = Math.atan2(inX * outY - inY * outX, inX * outX + inY * outY);
		const sign = turn > 0 ? 1 : -1;
		const tangent = vertex.radiusM * Math.tan(Math.abs(turn) / 2);
		const ux = inX / inLength;
		const uy = inY / inLength;
		const ax = vertex.xM - ux * tangent;
		const ay = vertex.yM - uy * tangent;
		const cx = ax - sign * uy * vertex.radiusM;
		const cy = ay + sign * ux * vertex.radiusM;
		const start = Math.atan2(ay - cy, ax - cx);
		const steps = Math.max(12, Math.ceil(vertex.radiusM * Math.abs(turn)));
		const from = points.length;
		for (let k = 0; k <= steps; k++) {
			const angle = start + (turn * k) / steps;
			points.push([cx + vertex.radiusM * Math.cos(angle), cy + vertex.radiusM * Math.sin(angle)]);
		}
		arcs.push({ name: vertex.name, from, to: points.length - 1, sign, radiusM: vertex.radiusM });
	});
	points.push([0, 0]);

	const along = [0];
	for (let i = 1; i < points.length; i++) {
		along.push(along[i - 1] + Math.hypot(points[i][0] - points[i - 1][0], points[i][1] - points[i - 1][1]));
	}
	const total = along[along.length - 1];
	const lengthM = Math.round(total);
	const x = new Float64Array(lengthM);
	const y = new Float64Array(lengthM);
	let j = 0;
	for (let s = 0; s < lengthM; s++) {
		const at = (s * total) / lengthM;
		while (along[j + 1] < at) j++;
		const f = (at - along[j]) / (along[j + 1] - along[j]);
		x[s] = points[j][0] + f * (points[j + 1][0] - points[j][0]);
		y[s] = points[j][1] + f * (points[j + 1][1] - points[j][1]);
	}
	// Transitions: roads do not jump from straight to arc, and a smoothing of 5 m gives a kart as well as a car room to turn in.
	const sigma = lengthM < 1200 ? 3 : 5;
	const xM = smoothClosed(x, sigma);
	const yM = smoothClosed(y, sigma);
	const normalX = new Float64Array(lengthM);
	const normalY = new Float64Array(lengthM);
	for (let i = 0; i < lengthM; i++) {
		const dx = xM[(i + 1) % lengthM] - xM[(i + lengthM - 1) % lengthM];
		const dy = yM[(i + 1) % lengthM] - yM[(i + lengthM - 1) % lengthM];
		const d = Math.hypot(dx, dy);
		normalX[i] = -dy / d;
		normalY[i] = dx / d;
	}
	const place = (index: number): number => (along[index] * lengthM) / total;
	const corners = arcs.map(({ name, from, to, sign, radiusM }) => {
		const startM = place(from);
		const endM = place(to);
		return { name, startM, apexM: (startM + endM) / 2, endM, sign, radiusM } as CentreLine['corners'][number];
	});
	return { lengthM, xM, yM, normalX, normalY, corners };
}
