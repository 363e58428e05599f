import { changeFrame } from '../../analysis/path/changeFrame.ts';
import type { ReferencePath } from '../../analysis/model.ts';

/** Two laps of one circuit differ by line and by how distance is measured; two circuits of one length within this are rare. */
const LENGTH_TOLERANCE = 0.02;
/** Half the width of a wide track, and the error of a plain receiver. */
const ON_ROAD_M = 20;
/** Share of the path that must lie on the other's road. A layout that shares a straight with another falls short of this. */
const SHARED_ROAD = 0.97;
/** Shape alone, turned and moved: what may be left over, as a share of the length. */
const SHAPE_TOLERANCE = 0.012;
const SHAPE_POINTS = 180;
/** Without any shape the speeds along the lap have to look alike. */
const SPEED_LIKENESS = 0.9;
const SPEED_LENGTH_TOLERANCE = 0.01;

/**
 * Is the path of a run the path of a known layout, driven in the same direction.
 *
 * By place where both know where on earth they are; else by length and shape, turned and moved and started at any point; else,
 * where one of them knows no shape, by length and the speeds along the lap.
 *
 * @param own path built from the run; not closed where the run holds no whole lap
 */
export function matchesLayout(own: ReferencePath, known: ReferencePath): boolean {
	if (own.frame && known.frame && own.origin === 'positions' && known.origin === 'positions') return liesOn(own, known);
	if (!own.closed || !isNear(own.lengthM, known.lengthM, LENGTH_TOLERANCE)) return false;
	if (own.origin === 'speedOnly' || known.origin === 'speedOnly') return hasSameSpeeds(own, known);
	return hasSameShape(own, known);
}

function isNear(a: number, b: number, tolerance: number): boolean {
	return Math.abs(a - b) <= tolerance * b;
}

/** Both on earth: the run's path lies on the layout's road and runs the same way. */
function liesOn(own: ReferencePath, known: ReferencePath): boolean {
	if (!own.frame || !known.frame) return false;
	if (own.closed && !isNear(own.lengthM, known.lengthM, LENGTH_TOLERANCE)) return false;
	const { xM, yM } = changeFrame(own.xM, own.yM, own.frame, known.frame);
	const cells = new Map<string, number[]>();
	const cellOf = (x: number, y: number) => `${Math.floor(x / ON_ROAD_M)},${Math.floor(y / ON_ROAD_M)}`;
	for (let i = 0; i < known.xM.length; i += 3) {
		const key = cellOf(known.xM[i], known.yM[i]);
		const inCell = cells.get(key);
		if (inCell) inCell.push(i);
		else cells.set(key, [i]);
	}
	const step = Math.max(1, Math.floor(xM.length / 400));
	let looked = 0;
	let along = 0;
	for (let i = step; i < xM.length; i += step) {
		looked++;
		if (runsAlong(i)) along++;
	}
	return looked > 0 && along >= SHARED_ROAD * looked;

	/** Is there a point of the layout near this one whose direction is this one's. */
	function runsAlong(i: number): boolean {
		const headingX = xM[i] - xM[i - 1];
		const headingY = yM[i] - yM[i - 1];
		for (const dx of [-ON_ROAD_M, 0, ON_ROAD_M]) {
			for (const dy of [-ON_ROAD_M, 0, ON_ROAD_M]) {
				for (const j of cells.get(cellOf(xM[i] + dx, yM[i] + dy)) ?? []) {
					if (Math.hypot(known.xM[j] - xM[i], known.yM[j] - yM[i]) > ON_ROAD_M) continue;
					const after = (j + 1) % known.xM.length;
					const cosine = headingX * (known.xM[after] - known.xM[j]) + headingY * (known.yM[after] - known.yM[j]);
					if (cosine > 0) return true;
				}
			}
		}
		return false;
	}
}

/** Least squares over turn and shift of `SHAPE_POINTS` points, for every start point: what is left over, r.m.s. */
function hasSameShape(own: ReferencePath, known: ReferencePath): boolean {
	const a = evenPoints(own);
	const b = evenPoints(known);
	let best = Infinity;
	for (let shift = 0; shift < SHAPE_POINTS; shift++) {
		// For centred points: Σ|a|² + Σ|b|² − 2·|Σ conj(a)·b| is the residual at the best turn (Kabsch in the plane).
		let real = 0;
		let imaginary = 0;
		let squares = 0;
		for (let i = 0; i < SHAPE_POINTS; i++) {
			const j = (i + shift) % SHAPE_POINTS;
			real += a.x[i] * b.x[j] + a.y[i] * b.y[j];
			imaginary += a.x[i] * b.y[j] - a.y[i] * b.x[j];
			squares += a.x[i] ** 2 + a.y[i] ** 2 + b.x[j] ** 2 + b.y[j] ** 2;
		}
		best = Math.min(best, squares - 2 * Math.hypot(real, imaginary));
	}
	return Math.sqrt(Math.max(0, best) / SHAPE_POINTS) <= SHAPE_TOLERANCE * known.lengthM;
}

/** Points at equal shares of the length, about their middle. */
function evenPoints({ xM, yM, lengthM }: ReferencePath): { x: Float64Array; y: Float64Array } {
	const x = new Float64Array(SHAPE_POINTS);
	const y = new Float64Array(SHAPE_POINTS);
	for (let i = 0; i < SHAPE_POINTS; i++) {
		const at = Math.min(xM.length - 1, Math.round((i / SHAPE_POINTS) * lengthM));
		x[i] = xM[at];
		y[i] = yM[at];
	}
	const middleX = x.reduce((sum, value) => sum + value, 0) / SHAPE_POINTS;
	const middleY = y.reduce((sum, value) => sum + value, 0) / SHAPE_POINTS;
	return { x: x.map((value) => value - middleX), y: y.map((value) => value - middleY) };
}

/** Correlation of the speeds along the lap, at the start point that suits best. */
function hasSameSpeeds(own: ReferencePath, known: ReferencePath): boolean {
	if (!isNear(own.lengthM, known.lengthM, SPEED_LENGTH_TOLERANCE)) return false;
	const a = evenSpeeds(own);
	const b = evenSpeeds(known);
	const size = Math.sqrt(a.reduce((sum, v) => sum + v * v, 0) * b.reduce((sum, v) => sum + v * v, 0));
	if (!(size > 0)) return false;
	let best = 0;
	for (let shift = 0; shift < SHAPE_POINTS; shift++) {
		let product = 0;
		for (let i = 0; i < SHAPE_POINTS; i++) product += a[i] * b[(i + shift) % SHAPE_POINTS];
		best = Math.max(best, product / size);
	}
	return best >= SPEED_LIKENESS;
}

function evenSpeeds({ speedKmh, lengthM }: ReferencePath): Float64Array {
	const speeds = Float64Array.from({ length: SHAPE_POINTS }, (_, i) => {
		const value = speedKmh[Math.min(speedKmh.length - 1, Math.round((i / SHAPE_POINTS) * lengthM))];
		return Number.isFinite(value) ? value : 0;
	});
	const middle = speeds.reduce((sum, value) => sum + value, 0) / SHAPE_POINTS;
	return speeds.map((value) => value - middle);
}
