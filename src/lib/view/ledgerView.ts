import { scaleLinear, type ScaleLinear } from 'd3-scale';
import { deltaWord, formatSignedSeconds, type DeltaWord } from '../format/delta.ts';
import { formatNumber } from '../format/number.ts';
import type { Comparison, LedgerRow } from '../schemas/analysisDocument.ts';
import type { CornerView } from '../schemas/views.ts';
import { cornerCall } from './cornerTitle.ts';

export interface LedgerFigure {
	deltaS: number;
	text: string;
	word: DeltaWord;
}

/** One column of the ledger: the run-up, or a corner with its three parts. */
export interface LedgerColumn {
	/** 0 is the run-up */
	corner: number;
	/** "4", "run-up" */
	head: string;
	/** "4 Tern Hairpin" */
	call: string;
	/** entry, mid, exit; the run-up has an entry alone */
	parts: [LedgerFigure, LedgerFigure | null, LedgerFigure | null];
	total: LedgerFigure;
	bars: LedgerBar[];
	/** over the bars, where the column is worth a label */
	label: { text: string; topPx: number } | null;
	/** share of the largest |total|, for the list on a phone */
	share: number;
}

/** A step: px from the top of the chart, and the level that it ends on. */
export interface LedgerBar {
	topPx: number;
	heightPx: number;
	word: DeltaWord;
	endPx: number;
	/** place within the column, 0–1 */
	from: number;
	to: number;
}

/** The running total from line to line, three steps a corner, ending at the gap. */
export interface LedgerView {
	heightPx: number;
	zeroPx: number;
	ticks: { topPx: number; text: string }[];
	columns: LedgerColumn[];
	/** entry, mid, exit and all, summed over the columns */
	sums: [LedgerFigure, LedgerFigure, LedgerFigure, LedgerFigure];
	gapBar: { topPx: number; heightPx: number; word: DeltaWord };
}

const HEIGHT_PX = 196;
const TOP_PX = 22;
const FOOT_PX = 4;
/** A step that costs nothing visible is still a step. */
const THINNEST_PX = 1.4;
const LABEL_FROM_S = 0.1;
/** bars stand in the column with this much air on either side, and between them */
const SIDE = 0.09;
const BETWEEN = 0.035;

const figure = (deltaS: number): LedgerFigure => ({
	deltaS,
	text: formatSignedSeconds(deltaS),
	word: deltaWord(deltaS)
});

/** Draws the ledger; the steps end at the sum of its rows by construction. */
export function ledgerView(comparison: Comparison, corners: readonly CornerView[]): LedgerView {
	const rows = comparison.ledger.filter((row) => row.corner > 0 || deltaWord(row.totalS) !== 'level');
	const levels = [0];
	for (const row of rows) for (const part of partsOf(row)) levels.push(levels[levels.length - 1] + part);
	const y = scaleLinear(
		[Math.min(...levels), Math.max(...levels, Math.min(...levels) + 0.05)],
		[HEIGHT_PX - FOOT_PX, TOP_PX]
	);
	const worst = Math.max(...rows.map((row) => Math.abs(row.totalS)), 1e-9);
	let running = 0;
	const columns = rows.map((row): LedgerColumn => {
		const parts = partsOf(row);
		const width = (1 - 2 * SIDE - 2 * BETWEEN) / 3;
		let highest = running;
		const bars = parts.map((part, k): LedgerBar => {
			const [from, to] = [y(running), y(running + part)];
			running += part;
			highest = Math.max(highest, running);
			const heightPx = Math.max(THINNEST_PX, Math.abs(to - from));
			const left = SIDE + (parts.length === 1 ? 1 : k) * (width + BETWEEN);
			return {
				topPx: round(Math.min(from, to)),
				heightPx: round(heightPx),
				word: deltaWord(part),
				endPx: round(to),
				from: round(left, 4),
				to: round(left + width, 4)
			};
		});
		const corner = corners.find((c) => c.number === row.corner);
		return {
			corner: row.corner,
			head: row.corner === 0 ? 'run-up' : String(row.corner),
			call: row.corner === 0 ? 'run-up' : cornerCall(corner ?? { number: row.corner, name: null }),
			parts:
				row.corner === 0 ? [figure(row.totalS), null, null] : [figure(row.entryS), figure(row.midS), figure(row.exitS)],
			total: figure(row.totalS),
			bars,
			label:
				Math.abs(row.totalS) > LABEL_FROM_S
					? { text: formatSignedSeconds(row.totalS), topPx: round(y(highest) - 7) }
					: null,
			share: round(Math.abs(row.totalS) / worst, 4)
		};
	});
	const sum = (pick: (row: LedgerRow) => number): LedgerFigure =>
		figure(comparison.ledger.reduce((total, row) => total + pick(row), 0));
	const end = y(running);
	return {
		heightPx: HEIGHT_PX,
		zeroPx: round(y(0)),
		ticks: fewTicks(y).map((value) => ({
			topPx: round(y(value)),
			text: formatNumber(value, { decimals: Number.isInteger(value * 10) ? 1 : 2 })
		})),
		columns,
		sums: [
			sum((row) => (row.corner === 0 ? row.totalS : row.entryS)),
			sum((row) => (row.corner === 0 ? 0 : row.midS)),
			sum((row) => (row.corner === 0 ? 0 : row.exitS)),
			sum((row) => row.totalS)
		],
		gapBar: {
			topPx: round(Math.min(end, y(0))),
			heightPx: round(Math.max(THINNEST_PX, Math.abs(end - y(0)))),
			word: deltaWord(running)
		}
	};
}

/** At most three levels beside zero. */
function fewTicks(y: ScaleLinear<number, number>): number[] {
	const levels = (count: number): number[] => y.ticks(count).filter((value) => value !== 0);
	return [4, 3, 2, 1].map(levels).find((ticks) => ticks.length <= 3) ?? [];
}

/** The run-up is one step: all of it is entry. */
function partsOf(row: LedgerRow): number[] {
	return row.corner === 0 ? [row.totalS] : [row.entryS, row.midS, row.exitS];
}

function round(value: number, decimals = 1): number {
	return Number(value.toFixed(decimals));
}
