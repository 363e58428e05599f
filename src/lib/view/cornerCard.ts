import { scaleLinear } from 'd3-scale';
import type { DateFormat } from '../format/date.ts';
import { deltaWord, formatDelta, formatSignedSeconds, type DeltaWord } from '../format/delta.ts';
import { formatSpeed, type SpeedUnit } from '../format/speed.ts';
import type { ComparisonView, CornerView, Fairness } from '../schemas/views.ts';
import { cornerCall, cornerFacts, cornerInWords, cornerName } from './cornerTitle.ts';
import { cornerWindow, type CornerWindow } from './cornerWindow.ts';
import { deltaDomain, deltaRow, type DeltaRow } from './deltaRow.ts';
import {
	evidencePlace,
	placeTag,
	rowCanvas,
	TAG_PLOTS,
	valueOf,
	type EvidenceTag,
	type RowCanvas
} from './evidenceTags.ts';
import { findingLines, orderedFindings, type FindingLines } from './findingLines.ts';
import { deltaAt, gridValue, metresBetween } from './gridValue.ts';
import { placeLabel } from './geometry/placeLabel.ts';
import { driverLabel, referenceLabel, type LapLabel } from './lapLabels.ts';
import { numbersTable, type NumberRow } from './numbersTable.ts';
import { placedCorner, type PlacedCorner } from './placedCorner.ts';
import { planView, type PlanView } from './planView.ts';
import { rankText } from './rankText.ts';
import { rulerView, type RulerView } from './rulerView.ts';
import { samplesTable, type SamplesTable } from './samplesTable.ts';
import { splitView, type SplitPart } from './splitView.ts';
import { traceRows, type TraceRow } from './traceRows.ts';

export interface CardOptions {
	speedUnit?: SpeedUnit;
	date?: DateFormat;
}

/** Everything that a corner card shows, as text, places and path data: no trace, no typed array, nothing left to compute. */
export interface CornerCard {
	number: number;
	name: string;
	facts: string;
	/** "+0.312 s lost" */
	gap: { deltaS: number; text: string; word: DeltaWord; rank: string };
	driver: LapLabel;
	reference: LapLabel;
	own: boolean;
	fairness: Fairness[];
	neighbours: { previous: Neighbour | null; next: Neighbour | null };
	window: CornerWindow;
	lengthM: number;
	closed: boolean;
	speedUnit: SpeedUnit;
	split: SplitPart[];
	rows: TraceRow[];
	delta: DeltaRow;
	ruler: RulerView;
	plan: PlanView | null;
	tags: EvidenceTag[];
	slowest: SlowestLabel | null;
	findings: FindingLines;
	numbers: NumberRow[];
	allNumbers: NumberRow[];
	samples: SamplesTable;
	/** where the cursor stands before anybody moves it, and what it reads there */
	cursor: CursorReading;
	/** what the card says, in a sentence, for those who hear it */
	alt: string;
}

export interface Neighbour {
	number: number;
	call: string;
}

/** Values under the cursor; null is a gap, an absent channel, or for Δ a place before the span. Speeds in the reader's unit. */
export interface CursorReading {
	placeM: number;
	driver: Record<TraceRow['key'], number | null>;
	reference: Record<TraceRow['key'], number | null>;
	deltaS: number | null;
}

/** The minimum speeds, written inside the dip. */
export interface SlowestLabel {
	atM: number;
	/** px from the top of the speed row: the driver's dot, and the label's top */
	dotPx: number;
	topPx: number;
	shiftPx: number;
	driver: string;
	reference: string;
	/** is there room for it on a desk's plot; on a phone's it is a line of its own */
	room: boolean;
}

/**
 * Turns a comparison into the card of one corner.
 *
 * @returns null where the layout has no such numbered corner
 */
export function cornerCard(view: ComparisonView, number: number, options: CardOptions = {}): CornerCard | null {
	const { speedUnit = 'kmh', date } = options;
	const places = placedCorner(view, number);
	const corner = view.corners.find((c) => c.number === number);
	if (!places || !corner) return null;
	const { driverGrid, referenceGrid, comparison } = view;
	const { lengthM, closed } = view.path;
	const window = cornerWindow(places, { marginM: driverGrid.marginM, lengthM });
	const rows = traceRows({
		driver: driverGrid,
		reference: referenceGrid,
		fromM: window.fromM,
		toM: window.toM,
		speedUnit
	});
	const ruler = rulerView({
		...window,
		lengthM,
		closed,
		marks: [
			{ atM: corner.apexM, name: 'apex' },
			{ atM: places.turnInM, name: 'turn-in' },
			{ atM: places.endM, name: 'corner end' }
		]
	});
	const totalS = places.ledger.totalS;
	const findings = findingLines(comparison, number);
	const chart = { view, window, rows, speedUnit };
	const { tags, slowest } = annotate(chart, places);
	const placeM = cursorPlace(tags, places, window);
	return {
		number,
		name: cornerName(corner),
		facts: cornerFacts(corner, view.corners),
		gap: {
			deltaS: totalS,
			text: formatDelta(totalS),
			word: deltaWord(totalS),
			rank: rankText(comparison, number)
		},
		driver: driverLabel(view.driver),
		reference: referenceLabel(view.reference, view.driver, date),
		own: view.driver.own,
		fairness: view.fairness,
		neighbours: neighbours(view, number),
		window,
		lengthM,
		closed,
		speedUnit,
		split: splitView(places, window, window.exitGoesOnToM),
		rows,
		delta: deltaRow({
			driver: driverGrid,
			reference: referenceGrid,
			windowM: [window.fromM, window.toM],
			spanM: [places.spans.entryM, places.spans.endM],
			domain: commonDomain(view)
		}),
		ruler,
		plan: planView(view, corner, places, window),
		tags,
		slowest,
		findings,
		numbers: numbersTable({ places, lengthM, closed, speedUnit, mainOnly: true }),
		allNumbers: numbersTable({ places, lengthM, closed, speedUnit }),
		samples: samplesTable(view, window, places.spans.entryM, speedUnit),
		cursor: readingAt(chart, placeM, places.spans.entryM),
		alt: altText(corner, places, findings)
	};
}

interface Chart extends Read {
	window: CornerWindow;
}

/** What a reading at a place needs. */
interface Read {
	view: ComparisonView;
	rows: TraceRow[];
	speedUnit: SpeedUnit;
}

/** All spans of a lap share one scale of time, so that cards compare. */
export function commonDomain({ comparison, driverGrid, referenceGrid }: ComparisonView): [number, number] {
	const spans = comparison.ledger
		.filter((row) => row.corner > 0)
		.map((row): [number, number] => [row.entryM, row.endM]);
	return deltaDomain(driverGrid, referenceGrid, spans);
}

/** Rings and the slowest speeds, placed so that they cover as little as they can. */
function annotate(chart: Chart, places: PlacedCorner): Pick<CornerCard, 'tags' | 'slowest'> {
	const { view, window, rows, speedUnit } = chart;
	const canvases = new Map(
		rows.map((row) => {
			const canvas = (plotPx: number): RowCanvas =>
				rowCanvas({ row, plotPx, ...window, driver: view.driverGrid, reference: view.referenceGrid, speedUnit });
			return [row.key, { wide: canvas(TAG_PLOTS.wide), narrow: canvas(TAG_PLOTS.narrow) }];
		})
	);
	const speed = canvases.get('speed');
	const slowest = speed ? slowestLabel(speed.wide, places) : null;
	const tags = orderedFindings(view.comparison, places.ledger.corner).told.flatMap(({ finding, number }) => {
		const place = evidencePlace(finding, rows, window, places, view.path.lengthM, view.path.closed);
		const canvas = place && canvases.get(place.row.key);
		return place && canvas && number !== null ? [placeTag(number, finding.code, place.atM, canvas)] : [];
	});
	return { tags, slowest };
}

function slowestLabel(canvas: RowCanvas, places: PlacedCorner): SlowestLabel | null {
	const { driver, reference } = places;
	const atM = driver?.minSpeedM ?? null;
	if (driver?.minKmh == null || reference?.minKmh == null || atM === null) return null;
	if (!(atM >= canvas.fromM) || !(atM <= canvas.toM)) return null;
	const y = scaleLinear(canvas.row.domain, [canvas.row.heightPx, 0]);
	const dotPx = y(valueOf(canvas, canvas.driver, atM));
	if (!Number.isFinite(dotPx)) return null;
	const middle = scaleLinear([canvas.fromM, canvas.toM], [0, canvas.plotPx])(atM);
	const size = { width: 58, height: 46 };
	const candidates = [0, -10, 10, -22, 22].map((shiftPx, order) => ({
		x: middle + shiftPx - size.width / 2,
		y: dotPx - 16 - size.height,
		...size,
		shiftPx,
		penalty: order * 0.5
	}));
	const frame = { x: 0, y: -14, width: canvas.plotPx, height: canvas.row.heightPx + 14 };
	const { chosen, cost } = placeLabel(candidates, { points: canvas.points, boxes: canvas.boxes, frame });
	const room = cost < 4;
	if (room) canvas.boxes.push(chosen);
	return {
		atM,
		dotPx: Math.round(dotPx * 10) / 10,
		topPx: Math.round(chosen.y),
		shiftPx: chosen.shiftPx,
		driver: formatSpeed(driver.minKmh, canvas.speedUnit),
		reference: formatSpeed(reference.minKmh, canvas.speedUnit),
		room
	};
}

/** The cursor waits at the first finding's evidence, else at the apex. */
function cursorPlace(tags: EvidenceTag[], places: PlacedCorner, window: CornerWindow): number {
	const atM = Math.round(tags[0]?.atM ?? places.apexM);
	return Math.min(window.toM, Math.max(window.fromM, atM));
}

/** What both laps have at a place, in the units of the rows; Δ counts from `zeroM`. */
export function readingAt({ view, rows, speedUnit }: Read, placeM: number, zeroM: number): CursorReading {
	const known = (value: number): number | null => (Number.isFinite(value) ? Math.round(value * 1000) / 1000 : null);
	const read = (grid: ComparisonView['driverGrid']): CursorReading['driver'] => {
		const values: CursorReading['driver'] = { brake: null, speed: null, throttle: null, steering: null };
		for (const row of rows) values[row.key] = known(valueOf({ row, speedUnit }, grid, placeM));
		return values;
	};
	// Before the span begins there is nothing to count from.
	const delta =
		placeM < zeroM
			? NaN
			: deltaAt(view.driverGrid, view.referenceGrid, placeM) - deltaAt(view.driverGrid, view.referenceGrid, zeroM);
	return { placeM, driver: read(view.driverGrid), reference: read(view.referenceGrid), deltaS: known(delta) };
}

function neighbours(view: ComparisonView, number: number): CornerCard['neighbours'] {
	const numbered = view.corners.filter((c) => c.number !== null).sort((a, b) => (a.number ?? 0) - (b.number ?? 0));
	const at = numbered.findIndex((c) => c.number === number);
	const neighbour = (step: number): Neighbour | null => {
		const index = view.path.closed ? (at + step + numbered.length) % numbered.length : at + step;
		const corner = numbered[index];
		return !corner || corner.number === null || index === at
			? null
			: { number: corner.number, call: cornerCall(corner) };
	};
	return { previous: neighbour(-1), next: neighbour(1) };
}

function altText(corner: CornerView, places: PlacedCorner, { lines }: FindingLines): string {
	const { entryS, midS, exitS, totalS } = places.ledger;
	const parts = `entry ${formatSignedSeconds(entryS)}, mid ${formatSignedSeconds(midS)}, exit ${formatSignedSeconds(exitS)}`;
	const cause = lines[0]?.segments.map((segment) => segment.text).join('') ?? '';
	return `${cornerInWords(corner)}: ${formatDelta(totalS)}; ${parts}.${cause ? ` ${cause}` : ''}`;
}

/** Is there anything to read of a lap within a window: false where the recording has a hole as wide as it. */
export function hasTrace(view: ComparisonView, { fromM, toM }: CornerWindow): boolean {
	return metresBetween(fromM, toM).some((placeM) => Number.isFinite(gridValue(view.driverGrid, 'speedKmh', placeM)));
}
