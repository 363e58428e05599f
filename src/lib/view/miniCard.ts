import { UNITS_PER_PX, WIDTH_UNITS } from './geometry/units.ts';
import { scaleLinear } from 'd3-scale';
import { deltaWord, formatDelta, formatSignedSeconds, type DeltaWord } from '../format/delta.ts';
import type { LapGrid } from '../analysis/model.ts';
import type { ComparisonView } from '../schemas/views.ts';
import { cornerName } from './cornerTitle.ts';
import { cornerWindow } from './cornerWindow.ts';
import { deltaRow, type DeltaRow } from './deltaRow.ts';
import { findingLines } from './findingLines.ts';
import { gridValue, metresBetween, type GridColumn } from './gridValue.ts';
import { tracePath } from './geometry/tracePath.ts';
import type { TextPart } from '../analysis/findings/findingText.ts';
import { placedCorner } from './placedCorner.ts';
import { cornerFrame, handAt, MINI_RIBBON, planRibbon, planTrack, stretchLines } from './planLines.ts';

/** One corner on the contact sheet. */
export interface MiniCard {
	number: number;
	name: string;
	total: { deltaS: number; text: string; word: DeltaWord };
	parts: { name: 'entry' | 'mid' | 'exit'; text: string }[];
	/** the largest cause, and the next one where there is room */
	sentence: TextPart[];
	/** "habit, 6 of 7" */
	habit: string | null;
	plan: { widthPx: number; heightPx: number; reference: string; driver: string } | null;
	/** brake over speed on one drawing, WIDTH_UNITS wide; empty paths where a channel is absent */
	traces: { heightPx: number; brake: PenPair | null; floorPx: number; speed: PenPair };
	/** 0–1 across: turn-in, apex, corner end */
	guides: { at: number; apex: boolean }[];
	delta: DeltaRow;
}

export interface PenPair {
	driver: string;
	reference: string;
}

const PLAN = {
	widthPx: 112,
	heightPx: [132, 132] as [number, number],
	padding: [8, 10, 8, 10] as [number, number, number, number]
};
const TRACES_PX = 108;
/** A second cause follows the first where both fit on two lines. */
const TWO_LINES = 78;

/** @returns null where the layout has no such numbered corner */
export function miniCard(view: ComparisonView, number: number, domain: [number, number]): MiniCard | null {
	const places = placedCorner(view, number);
	const corner = view.corners.find((c) => c.number === number);
	if (!places || !corner) return null;
	const { driverGrid, referenceGrid, path } = view;
	const window = cornerWindow(places, { leadM: 14, widestM: 210, marginM: driverGrid.marginM, lengthM: path.lengthM });
	const { fromM, toM } = window;
	const placesM = metresBetween(fromM, toM);
	const x = scaleLinear([fromM, toM], [0, WIDTH_UNITS]);
	const read = (grid: LapGrid, column: GridColumn): number[] => placesM.map((s) => gridValue(grid, column, s));
	const pair = (
		column: GridColumn,
		domainOf: (values: number[]) => [number, number],
		px: [number, number]
	): PenPair => {
		const driver = read(driverGrid, column);
		const reference = read(referenceGrid, column);
		const y = scaleLinear(
			domainOf([...driver, ...reference].filter(Number.isFinite)),
			px.map((v) => v * UNITS_PER_PX)
		);
		const draw = (values: number[]): string => tracePath({ placesM, values, x, y, tolerance: 2.5 });
		return { driver: draw(driver), reference: draw(reference) };
	};
	const hasBrake = driverGrid.brakePct !== null || referenceGrid.brakePct !== null;
	const floorPx = hasBrake ? 44 : 0;
	const hand = handAt(path, corner.apexM, corner.direction);
	const planFrom = Math.max(fromM, Math.floor(places.turnInM - 64));
	const planTo = Math.min(toM, Math.ceil(places.endM + 40));
	const lines = findingLines(view.comparison, number).lines.filter((line) => line.number !== null);
	const { ledger } = places;
	return {
		number,
		name: cornerName(corner),
		total: { deltaS: ledger.totalS, text: formatDelta(ledger.totalS), word: deltaWord(ledger.totalS) },
		parts: [
			{ name: 'entry', text: formatSignedSeconds(ledger.entryS) },
			{ name: 'mid', text: formatSignedSeconds(ledger.midS) },
			{ name: 'exit', text: formatSignedSeconds(ledger.exitS) }
		],
		sentence: sentence(
			lines.map((line) => line.segments),
			ledger.totalS
		),
		habit: lines[0]?.habit?.text.replace(/\u00a0laps?$/, '') ?? null,
		plan: path.origin === 'speedOnly' || planTo <= planFrom ? null : miniPlan(view, planFrom, planTo, hand),
		traces: {
			heightPx: TRACES_PX,
			floorPx,
			brake: hasBrake ? pair('brakePct', () => [0, 100], [floorPx, 5]) : null,
			speed: pair('speedKmh', spread, [TRACES_PX - 6, floorPx + 10])
		},
		guides: [
			{ atM: places.turnInM, apex: false },
			{ atM: corner.apexM, apex: true },
			{ atM: places.endM, apex: false }
		]
			.filter(({ atM }) => atM > fromM && atM < toM)
			.map(({ atM, apex }) => ({ at: Math.round((1e4 * (atM - fromM)) / (toM - fromM)) / 1e4, apex })),
		delta: deltaRow({
			driver: driverGrid,
			reference: referenceGrid,
			windowM: [fromM, toM],
			spanM: [places.spans.entryM, places.spans.endM],
			domain,
			heightPx: 26
		})
	};
}

function spread(values: number[]): [number, number] {
	let low = Infinity;
	let high = -Infinity;
	for (const value of values) {
		low = Math.min(low, value);
		high = Math.max(high, value);
	}
	return low < high ? [low, high] : ([low - 1, low + 1].map((v) => (Number.isFinite(v) ? v : 0)) as [number, number]);
}

function miniPlan(view: ComparisonView, fromM: number, toM: number, hand: 1 | -1): MiniCard['plan'] {
	const lines = stretchLines(view, fromM, toM);
	const frame = cornerFrame({ lines, hand, ...PLAN, mostPxPerM: 1.6 });
	const ribbon = (line: typeof lines.driver, grid: LapGrid, widths: readonly [number, number]): string =>
		planRibbon(planTrack(line, frame, fromM), grid, widths, toM);
	return {
		widthPx: frame.widthPx,
		heightPx: frame.heightPx,
		reference: ribbon(lines.reference, view.referenceGrid, MINI_RIBBON.highlighter),
		driver: ribbon(lines.driver, view.driverGrid, MINI_RIBBON.pen)
	};
}

/** The first cause; the second behind it where both fit. Each is a sentence of its own already. */
function sentence(causes: TextPart[][], totalS: number): TextPart[] {
	const plain = (text: string): TextPart => ({ text, isReference: false });
	if (causes.length === 0) {
		return [plain(deltaWord(totalS) === 'found' ? 'Quicker here than the reference.' : 'No single cause found.')];
	}
	const length = (parts: TextPart[]): number => parts.reduce((sum, part) => sum + part.text.length, 0);
	const [first, second] = causes;
	return second && length(first) + length(second) <= TWO_LINES ? [...first, plain(' '), ...second] : first;
}
