import { UNITS_PER_PX } from './geometry/units.ts';
import type { LapGrid, ReferencePath } from '../analysis/model.ts';
import type { ComparisonView } from '../schemas/views.ts';
import { gridValue } from './gridValue.ts';
import { pathPoint, type PathPoint } from './geometry/pathPoint.ts';
import { planFrame, type PlanFrame } from './geometry/planFrame.ts';
import { ribbonPath, type RibbonPoint } from './geometry/ribbonPath.ts';

/** Widths by pressure, px at 0 and added at full: pressure is width, and no other scale of pressure stands in the plan. */
export const RIBBON = { pen: [1.6, 4.4], highlighter: [6.5, 7.5] } as const;
export const MINI_RIBBON = { pen: [1.1, 1.9], highlighter: [3.6, 3.4] } as const;

/** m between points of the drawn lines and of the cursor's track. */
const STEP_M = 2;

/** Points of one line every STEP_M metres, in px; NaN where the car is not known to be. */
export interface PlanTrack {
	fromM: number;
	stepM: number;
	points: [number, number][];
}

/** How the layout turns at a place: +1 left, −1 right. */
export function handAt(path: ReferencePath, placeM: number, direction: 'left' | 'right' | null): 1 | -1 {
	if (direction !== null) return direction === 'left' ? 1 : -1;
	const index = Math.round(((placeM % path.lengthM) + path.lengthM) % path.lengthM);
	return (path.curvaturePerM[Math.min(index, path.curvaturePerM.length - 1)] ?? 0) >= 0 ? 1 : -1;
}

/** Places of the drawn lines: every STEP_M metres, and the window's end. */
function planPlaces(fromM: number, toM: number): number[] {
	const places: number[] = [];
	for (let s = fromM; s < toM; s += STEP_M) places.push(s);
	return [...places, toM];
}

/** The path and both cars' lines over a stretch, in metres of the local frame; NaN where a car is not known to be. */
export interface StretchLines {
	fromM: number;
	toM: number;
	path: PathPoint[];
	driver: { x: number; y: number }[];
	reference: { x: number; y: number }[];
}

/** Reads both lines off the grids. Without positions a car is on the layout's path, which is said beside the plan. */
export function stretchLines(view: ComparisonView, fromM: number, toM: number): StretchLines {
	const places = planPlaces(fromM, toM);
	const path = places.map((s) => pathPoint(view.path, s));
	const line = (grid: LapGrid): { x: number; y: number }[] =>
		path.map((at, i) => {
			const offset = grid.offsetM === null ? 0 : gridValue(grid, 'offsetM', places[i]);
			return { x: at.x + at.normalX * offset, y: at.y + at.normalY * offset };
		});
	return { fromM, toM, path, driver: line(view.driverGrid), reference: line(view.referenceGrid) };
}

export interface CornerFrameInput {
	lines: StretchLines;
	hand: 1 | -1;
	widthPx: number;
	heightPx: [number, number];
	padding: [number, number, number, number];
	mostPxPerM: number;
}

/** A frame for a corner in which the entry runs up; what is spare in width goes to the inside of the turn, for the labels. */
export function cornerFrame({ lines, hand, ...box }: CornerFrameInput): PlanFrame {
	const { path } = lines;
	const ahead = path[Math.min(path.length - 1, Math.round(8 / STEP_M))];
	const rotation = Math.PI / 2 - Math.atan2(ahead.y - path[0].y, ahead.x - path[0].x);
	const points = [...path, ...lines.driver, ...lines.reference].filter(
		(p) => Number.isFinite(p.x) && Number.isFinite(p.y)
	);
	return planFrame({ points, rotation, lean: hand < 0 ? 0.25 : 0.75, ...box });
}

/** A line in px, every STEP_M metres. */
export function planTrack(line: { x: number; y: number }[], frame: PlanFrame, fromM: number): PlanTrack {
	return { fromM, stepM: STEP_M, points: line.map(({ x, y }) => frame.place(x, y)) };
}

/** A lap's line as an outline that swells with brake pressure; a drop-out leaves a hole. */
export function planRibbon(track: PlanTrack, grid: LapGrid, widthsPx: readonly [number, number], toM: number): string {
	const runs: RibbonPoint[][] = [[]];
	track.points.forEach(([x, y], i) => {
		if (!Number.isFinite(x) || !Number.isFinite(y)) {
			if (runs[runs.length - 1].length > 0) runs.push([]);
			return;
		}
		const placeM = Math.min(toM, track.fromM + i * track.stepM);
		const pressure = gridValue(grid, 'brakePct', placeM) / 100;
		const share = Number.isFinite(pressure) ? Math.min(1, Math.max(0, pressure)) : 0;
		const width = (widthsPx[0] + widthsPx[1] * share) * UNITS_PER_PX;
		runs[runs.length - 1].push({ x: x * UNITS_PER_PX, y: y * UNITS_PER_PX, width });
	});
	return runs.map(ribbonPath).join('');
}
