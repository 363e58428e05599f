import type { CentreLine } from './centreLine.ts';
import { smoothClosed } from './centreLine.ts';

/** Sweeps of the relaxation; more change the line by less than the wander of a lap. */
const SWEEPS = 3000;
/** Over-relaxation: above 1 is quicker, from 2 on it does not settle. */
const OVER = 1.6;

/**
 * Offsets of the line that turns most evenly within the road's width: least sum of squared curvature, found by relaxing each
 * knot in turn and keeping it on the road. What a practised driver's line looks like; outside, apex, outside come by themselves.
 *
 * @param road   centre line
 * @param widthM most that the line may leave the centre, either side
 * @returns offset to the left in m, on the centre line's 1 m grid
 */
export function calmestLine(road: CentreLine, widthM: number): Float64Array {
	const n = road.lengthM;
	const knots = Math.round(n / (n < 1200 ? 4 : 8));
	const place = Array.from({ length: knots }, (_, k) => Math.floor((k * n) / knots));
	const offset = new Float64Array(knots);
	const x = place.map((s) => road.xM[s]);
	const y = place.map((s) => road.yM[s]);
	const at = (k: number): number => (k + knots) % knots;
	for (let sweep = 0; sweep < SWEEPS; sweep++) {
		for (let k = 0; k < knots; k++) {
			// Knot k stands in three second differences: with weight 1 in those of its neighbours, with −2 in its own.
			const [a, b, c, d] = [at(k - 2), at(k - 1), at(k + 1), at(k + 2)];
			const restX = 6 * x[k] - 4 * (x[b] + x[c]) + x[a] + x[d];
			const restY = 6 * y[k] - 4 * (y[b] + y[c]) + y[a] + y[d];
			const s = place[k];
			const step = (-OVER * (restX * road.normalX[s] + restY * road.normalY[s])) / 6;
			const next = Math.min(widthM, Math.max(-widthM, offset[k] + step));
			x[k] += (next - offset[k]) * road.normalX[s];
			y[k] += (next - offset[k]) * road.normalY[s];
			offset[k] = next;
		}
	}
	const fine = new Float64Array(n);
	for (let s = 0; s < n; s++) {
		const k = (s * knots) / n;
		const i = Math.floor(k);
		fine[s] = offset[at(i)] + (offset[at(i + 1)] - offset[at(i)]) * (k - i);
	}
	return smoothClosed(fine, n / knots);
}
