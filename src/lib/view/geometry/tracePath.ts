import { line } from 'd3-shape';
import { CompactPath } from './CompactPath.ts';
import { extremeIndices } from './extremeIndices.ts';
import { keepIndices } from './keepIndices.ts';

export interface TracePathInput {
	/** places in m, increasing */
	placesM: readonly number[];
	/** values at the places; NaN breaks the line */
	values: readonly number[];
	/** place → units of the drawing */
	x: (placeM: number) => number;
	/** value → units of the drawing */
	y: (value: number) => number;
	/** units; 1.2 units is an eighth of a pixel, which nobody sees */
	tolerance?: number;
	/** units to a pixel column: where points exceed pixels, only what a column can show is drawn */
	columnUnits?: number;
}

/**
 * The line of one channel as SVG path data: a gap breaks it and is never bridged, a lone sample becomes a dot. Empty where there
 * is nothing to draw.
 */
export function tracePath({ placesM, values, x, y, tolerance = 1.2, columnUnits }: TracePathInput): string {
	const path = new CompactPath();
	const everyX = placesM.map(x);
	const everyY = values.map((value) => (Number.isFinite(value) ? y(value) : NaN));
	const seen = columnUnits === undefined ? null : extremeIndices(everyX, everyY, columnUnits);
	const xs = seen?.map((i) => everyX[i]) ?? everyX;
	const ys = seen?.map((i) => everyY[i]) ?? everyY;
	line<number>()
		.defined((i) => Number.isFinite(ys[i]))
		.x((i) => xs[i])
		.y((i) => ys[i])
		.curve(path.curve)(thinnedIndices(xs, ys, tolerance));
	return path.toString();
}

/** Each unbroken stretch thinned on its own; the entries of gaps stay, so that they still break the line. */
function thinnedIndices(xs: number[], ys: number[], tolerance: number): number[] {
	const kept: number[] = [];
	let from = 0;
	for (let i = 0; i <= ys.length; i++) {
		if (i < ys.length && Number.isFinite(ys[i])) continue;
		kept.push(...keepIndices(xs.slice(from, i), ys.slice(from, i), tolerance).map((k) => k + from));
		if (i < ys.length) kept.push(i);
		from = i + 1;
	}
	return kept;
}
