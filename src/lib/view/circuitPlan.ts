import { UNITS_PER_PX } from './geometry/units.ts';
import { line } from 'd3-shape';
import { deltaWord, formatDelta, type DeltaWord } from '../format/delta.ts';
import type { ReferencePath } from '../analysis/model.ts';
import type { ComparisonView } from '../schemas/views.ts';
import { cornerCall } from './cornerTitle.ts';
import { CompactPath } from './geometry/CompactPath.ts';
import { pathPoint, type PathPoint } from './geometry/pathPoint.ts';
import { placeLabel, type Box } from './geometry/placeLabel.ts';
import { planFrame, type PlanFrame } from './geometry/planFrame.ts';
import { handAt } from './planLines.ts';

/** The layout from above, north up, each corner's number as large as what it cost. */
export interface CircuitPlan {
	widthPx: number;
	heightPx: number;
	/** path data in tenths of a pixel */
	outline: string;
	closed: boolean;
	/** the line: a stroke across, and where its name stands */
	line: { path: string; x: number; y: number };
	figures: CircuitFigure[];
}

export interface CircuitFigure {
	corner: number;
	call: string;
	/** px, centre */
	x: number;
	y: number;
	sizePx: number;
	word: DeltaWord;
	text: string;
}

const SIZE = { widthPx: 440, heightPx: [220, 340] as [number, number] };
const PADDING: [number, number, number, number] = [32, 36, 32, 36];
/** m between drawn points */
const STEP_M = 4;
/** Lost figures: 12 px and up to 24 more. Found ones are ringed, all alike. */
const SMALLEST_PX = 12;
const GROWTH_PX = 24;
const FOUND_PX = 13;
const RING_PX = 22;
/** A figure leads to its card, so that each keeps the room of a target for itself. */
const TARGET_PX = 26;

/** Places along the layout in the plan's px, for a cursor that runs through it. */
export interface CircuitTrack {
	stepM: number;
	/** x and y in turn */
	points: number[];
}

/** @returns null where the layout has no shape (speed only) */
export function circuitTrack({ path }: Pick<ComparisonView, 'path'>): CircuitTrack | null {
	if (path.origin === 'speedOnly') return null;
	const { points, frame } = framed(path);
	const every = 2;
	const placed = points.filter((_, i) => i % every === 0).map(({ x, y }) => frame.place(x, y));
	return { stepM: STEP_M * every, points: placed.flat().map(Math.round) };
}

/** Points of the layout every STEP_M metres and the frame that they fill. */
function framed(path: ReferencePath): { points: PathPoint[]; frame: PlanFrame } {
	const points: PathPoint[] = [];
	for (let s = 0; s < path.lengthM; s += STEP_M) points.push(pathPoint(path, s));
	return { points, frame: planFrame({ points, rotation: 0, ...SIZE, padding: PADDING, mostPxPerM: 2 }) };
}

/** @returns null where the layout has no shape (speed only) */
export function circuitPlan(view: ComparisonView): CircuitPlan | null {
	const { path, comparison, corners } = view;
	if (path.origin === 'speedOnly') return null;
	const { points, frame } = framed(path);
	const drawn = points.map((p) => frame.place(p.x, p.y));
	const outline = new CompactPath();
	line<[number, number]>(
		([x]) => x * UNITS_PER_PX,
		([, y]) => y * UNITS_PER_PX
	).curve(outline.curve)(drawn);
	if (path.closed) outline.closePath();

	const start = pathPoint(path, 0);
	const [startX, startY] = frame.place(start.x, start.y);
	const [acrossX, acrossY] = frame.turn(start.normalX, start.normalY);
	const mark = new CompactPath();
	mark.moveTo((startX - acrossX * 6) * UNITS_PER_PX, (startY - acrossY * 6) * UNITS_PER_PX);
	mark.lineTo((startX + acrossX * 6) * UNITS_PER_PX, (startY + acrossY * 6) * UNITS_PER_PX);

	const obstacles = drawn.filter((_, i) => i % 2 === 0);
	const boxes: Box[] = [];
	const frameBox = { x: 0, y: 0, width: frame.widthPx, height: frame.heightPx };
	const worst = Math.max(...comparison.ledger.filter((row) => row.corner > 0).map((row) => row.totalS), 1e-9);
	const beside = (s: number, side: 1 | -1, awayPx: number): [number, number] => {
		const p = pathPoint(path, s);
		const [x, y] = frame.place(p.x, p.y);
		const [ox, oy] = frame.turn(p.normalX * side, p.normalY * side);
		return [x + ox * awayPx, y + oy * awayPx];
	};
	// The largest are placed first: they need the room.
	const figures = comparison.ledger
		.filter((row) => row.corner > 0)
		.sort((a, b) => b.totalS - a.totalS)
		.flatMap((row): CircuitFigure[] => {
			const corner = corners.find((c) => c.number === row.corner);
			if (!corner) return [];
			const word = deltaWord(row.totalS);
			const sizePx =
				word === 'lost' ? SMALLEST_PX + (GROWTH_PX * row.totalS) / worst : word === 'found' ? FOUND_PX : SMALLEST_PX;
			const digits = String(row.corner).length;
			const width = word === 'found' ? RING_PX : sizePx * 0.62 * digits;
			const height = word === 'found' ? RING_PX : sizePx * 0.8;
			const outside = -handAt(path, corner.apexM, corner.direction) as 1 | -1;
			const reach = 9 + Math.max(width, height) / 2;
			const [roomX, roomY] = [Math.max(width + 4, TARGET_PX), Math.max(height + 4, TARGET_PX)];
			const candidates = [outside, -outside as 1 | -1].flatMap((side, turn) =>
				[0, 8, 18, 30].flatMap((further, far) =>
					[0, -18, 18, -34, 34].map((along, aside) => {
						const [x, y] = beside(corner.apexM + along / frame.pxPerM, side, reach + further);
						const penalty = turn * 2 + far * 1.5 + Math.ceil(aside / 2) * 3;
						return { x: x - roomX / 2, y: y - roomY / 2, width: roomX, height: roomY, centre: [x, y], penalty };
					})
				)
			);
			const { chosen } = placeLabel(candidates, { points: obstacles, boxes, frame: frameBox });
			boxes.push({ x: chosen.x, y: chosen.y, width: roomX, height: roomY });
			return [
				{
					corner: row.corner,
					call: cornerCall(corner),
					x: Math.round(chosen.centre[0] * 10) / 10,
					y: Math.round(chosen.centre[1] * 10) / 10,
					sizePx: Math.round(sizePx * 10) / 10,
					word,
					text: formatDelta(row.totalS)
				}
			];
		})
		.sort((a, b) => a.corner - b.corner);
	const nameSpots = ([1, -1] as const).map((side) => {
		const [x, y] = beside(0, side, 16);
		return { x: x - 16, y: y - 8, width: 32, height: 16, centre: [x, y] };
	});
	const { chosen } = placeLabel(nameSpots, { points: obstacles, boxes, frame: frameBox });
	return {
		widthPx: frame.widthPx,
		heightPx: frame.heightPx,
		outline: outline.toString(),
		closed: path.closed,
		line: { path: mark.toString(), x: Math.round(chosen.centre[0]), y: Math.round(chosen.centre[1]) },
		figures
	};
}
