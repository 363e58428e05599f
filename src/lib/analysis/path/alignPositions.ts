import type { PathGeometry } from './pathGeometry.ts';
import type { Tracked } from './trackOnPath.ts';

/** A shift below this is not told from a line. */
const LEAST_SHIFT_M = 1;
const LARGEST_SHIFT_M = 15;
/** So many positions, spread over the run, say as much as all of them. */
const ENOUGH_POSITIONS = 20000;
/** Share of the offsets' variance that one shift of the whole run must explain: two lines differ corner by corner, a shift everywhere. */
const LEAST_EXPLAINED = 0.8;

/**
 * The shift by which a run's positions lie off a path as a whole: two recordings of one circuit differ by metres when their receivers
 * do. Least squares of the offsets on the path's direction across; only a shift that explains nearly all of them is believed, because
 * a driver on another line is off the path too, but not the same way everywhere.
 *
 * @returns metres to add to the run's positions; null where there is no such shift
 */
export function alignPositions({ placeM, offsetM }: Tracked, path: PathGeometry): { xM: number; yM: number } | null {
	const { lengthM, closed, alongX, alongY, placeM: places } = path;
	const spans = places.length - 1;
	let xx = 0;
	let xy = 0;
	let yy = 0;
	let xn = 0;
	let yn = 0;
	let nn = 0;
	const stride = Math.max(1, Math.floor(placeM.length / ENOUGH_POSITIONS));
	for (let j = 0; j < placeM.length; j += stride) {
		const offset = offsetM[j];
		if (!(Math.abs(offset) < LARGEST_SHIFT_M)) continue;
		const place = closed ? placeM[j] - Math.floor(placeM[j] / lengthM) * lengthM : placeM[j];
		const i = Math.min(Math.max(Math.round((place / lengthM) * spans), 0), spans);
		const acrossX = -alongY[i];
		const acrossY = alongX[i];
		xx += acrossX * acrossX;
		xy += acrossX * acrossY;
		yy += acrossY * acrossY;
		xn += acrossX * offset;
		yn += acrossY * offset;
		nn += offset * offset;
	}
	const det = xx * yy - xy * xy;
	// a path that runs one way only says nothing about a shift along itself
	if (!(det > 0.02 * xx * yy)) return null;
	const shiftX = (yy * xn - xy * yn) / det;
	const shiftY = (xx * yn - xy * xn) / det;
	const explained = (shiftX * xn + shiftY * yn) / nn;
	if (!(explained >= LEAST_EXPLAINED) || Math.hypot(shiftX, shiftY) < LEAST_SHIFT_M) return null;
	return { xM: -shiftX, yM: -shiftY };
}
