import { countInWords } from '../../../lib/format/count.ts';
import { formatUnit } from '../../../lib/format/unit.ts';
import type { NotebookPage } from '../../../lib/schemas/views.ts';

export interface ProgressCellModel {
	/** "4", "4–5" for a linked chain */
	numbers: string;
	name: string;
	/** last run against the zero line; null where the last run has no pass of it */
	lastS: number | null;
	/** what the zero line stands for */
	zero: 'reference' | 'best';
	/** "0.06 s better over six runs" */
	change: string;
	/** pen line, one point a run, in a box of WIDTH × HEIGHT */
	line: string;
	dots: { x: number; y: number }[];
	/** y of the zero line */
	zeroY: number;
}

export const WIDTH = 268;
export const HEIGHT = 54;
/** A change under this over all runs is called none: it is what a driver varies by. */
const NO_CHANGE_S = 0.03;
/** The scale never shows less than this, so that noise is not drawn as a mountain. */
const LEAST_SPAN_S = 0.3;

/**
 * Progress of each corner over the runs of a page, against the reference's time there, else against the driver's own best.
 * One scale for all corners, so that heights compare. Cells with fewer than two runs are left out.
 */
export function progressCells(progress: NotebookPage['progress']): ProgressCellModel[] {
	const cells = progress.flatMap((cell) => {
		const times = cell.points.map((point) => point.bestS);
		const known = times.filter((time) => time !== null);
		if (known.length < 2) return [];
		const zeroS = cell.referenceS ?? Math.min(...known);
		return [{ cell, gaps: times.map((time) => (time === null ? null : time - zeroS)) }];
	});
	const all = cells.flatMap(({ gaps }) => gaps.filter((gap) => gap !== null));
	const low = Math.min(0, ...all);
	const high = Math.max(low + LEAST_SPAN_S, ...all);
	const y = (gapS: number) => 5 + ((high - gapS) / (high - low)) * (HEIGHT - 10);
	return cells.map(({ cell, gaps }) => {
		const x = (index: number) => 7 + (index / Math.max(1, gaps.length - 1)) * (WIDTH - 14);
		const dots = gaps.flatMap((gap, index) => (gap === null ? [] : [{ x: round(x(index)), y: round(y(gap)) }]));
		const known = gaps.filter((gap) => gap !== null);
		return {
			numbers:
				cell.corners.length > 1 ? `${cell.corners[0]}–${cell.corners[cell.corners.length - 1]}` : `${cell.corners[0]}`,
			name: cell.names.filter((name) => name !== null).join(', '),
			lastS: gaps[gaps.length - 1] ?? null,
			zero: cell.referenceS === null ? 'best' : 'reference',
			change: describeChange(known[known.length - 1] - known[0], known.length),
			line: 'M' + dots.map((dot) => `${dot.x} ${dot.y}`).join('L'),
			dots,
			zeroY: round(y(0))
		};
	});
}

function describeChange(changeS: number, runs: number) {
	const over = `over ${countInWords(runs)} runs`;
	if (Math.abs(changeS) < NO_CHANGE_S) return `no change ${over}`;
	return `${formatUnit(Math.abs(changeS), 's', { decimals: 2 })} ${changeS < 0 ? 'better' : 'worse'} ${over}`;
}

function round(value: number) {
	return Math.round(value * 10) / 10;
}
