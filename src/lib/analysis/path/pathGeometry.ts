import type { ReferencePath } from '../model.ts';
import type { EvenLine } from './evenLine.ts';

/** A path as points with directions, as the projection needs it. */
export interface PathGeometry {
	lengthM: number;
	closed: boolean;
	/** place of each point; the last is lengthM, where a closed path is back at its first point */
	placeM: Float64Array;
	xM: Float64Array;
	yM: Float64Array;
	/** unit vector along the path */
	alongX: Float64Array;
	alongY: Float64Array;
	curvaturePerM: Float64Array;
}

/** Points nearer together than this are one. */
const LEAST_STEP_M = 0.02;

/** Geometry of a stored path, whose points lie at whole metres. */
export function geometryOfPath(path: ReferencePath): PathGeometry {
	const { lengthM, closed } = path;
	const stored = path.xM.length;
	const whole = lengthM - (stored - 1) < LEAST_STEP_M ? stored - 1 : stored;
	const points = closed ? whole + 1 : stored;
	const placeM = new Float64Array(points);
	const xM = new Float64Array(points);
	const yM = new Float64Array(points);
	const curvaturePerM = new Float64Array(points);
	for (let i = 0; i < points; i++) {
		const at = closed && i === whole ? 0 : i;
		placeM[i] = closed && i === whole ? lengthM : i;
		xM[i] = path.xM[at];
		yM[i] = path.yM[at];
		curvaturePerM[i] = path.curvaturePerM[at];
	}
	return withDirections({ lengthM, closed, placeM, xM, yM, curvaturePerM });
}

/** Geometry of a line that is still being fitted. */
export function geometryOfLine(line: EvenLine, curvature: Float64Array): PathGeometry {
	const { lengthM, closed, stepM } = line;
	const n = line.xM.length;
	const points = closed ? n + 1 : n;
	const placeM = new Float64Array(points);
	const xM = new Float64Array(points);
	const yM = new Float64Array(points);
	const curvaturePerM = new Float64Array(points);
	for (let i = 0; i < points; i++) {
		const at = i % n;
		placeM[i] = i === points - 1 ? lengthM : i * stepM;
		xM[i] = line.xM[at];
		yM[i] = line.yM[at];
		curvaturePerM[i] = curvature[at];
	}
	return withDirections({ lengthM, closed, placeM, xM, yM, curvaturePerM });
}

/** Direction at each point: that of the parabola through it and its neighbours, which may lie unevenly around the line. */
function withDirections(path: Omit<PathGeometry, 'alongX' | 'alongY'>): PathGeometry {
	const { xM, yM, placeM, closed } = path;
	const points = placeM.length;
	const alongX = new Float64Array(points);
	const alongY = new Float64Array(points);
	for (let i = 0; i < points; i++) {
		const atEnd = i === 0 || i === points - 1;
		const before = i > 0 ? i - 1 : closed ? points - 2 : 0;
		const behind = i < points - 1 ? i + 1 : closed ? 1 : points - 1;
		const back = atEnd && closed ? placeM[points - 1] - placeM[points - 2] : placeM[i] - placeM[before];
		const on = atEnd && closed ? placeM[1] - placeM[0] : placeM[behind] - placeM[i];
		const dx = slope(xM[before], xM[i], xM[behind], back, on);
		const dy = slope(yM[before], yM[i], yM[behind], back, on);
		const size = Math.hypot(dx, dy) || 1;
		alongX[i] = dx / size;
		alongY[i] = dy / size;
	}
	return { ...path, alongX, alongY };
}

/** Slope at the middle of three values that lie `back` and `on` apart; one-sided at an end. */
function slope(a: number, b: number, c: number, back: number, on: number): number {
	if (!(back > 0)) return (c - b) / on;
	if (!(on > 0)) return (b - a) / back;
	return (((b - a) / back) * on + ((c - b) / on) * back) / (back + on);
}
