import { deltaWord, formatDelta } from '../format/delta.ts';
import type { ComparisonView, Fairness } from '../schemas/views.ts';
import { circuitPlan, circuitTrack, type CircuitPlan, type CircuitTrack } from './circuitPlan.ts';
import { readingAt, type CardOptions, type CornerCard } from './cornerCard.ts';
import { cornerCall } from './cornerTitle.ts';
import { deltaDomain, deltaRow } from './deltaRow.ts';
import { gapInWords } from './gapInWords.ts';
import { UNITS_PER_PX } from './geometry/units.ts';
import { driverLabel, referenceLabel, type LapLabel } from './lapLabels.ts';
import { nearestTurn } from './placedCorner.ts';
import { rulerView } from './rulerView.ts';
import { samplesTable, type SamplesTable } from './samplesTable.ts';
import { traceRows, type RowKey } from './traceRows.ts';
import type { CornerBand, TraceSheet } from './traceSheet.ts';

/** A whole lap on one quiet page: the rows of a card from line to line, with the corners as bands. */
export interface LapPage extends TraceSheet {
	bands: CornerBand[];
	driver: LapLabel;
	reference: LapLabel;
	fairness: Fairness[];
	gap: Omit<CornerCard['gap'], 'rank'>;
	/** the conclusion in sentences */
	words: string[];
	circuit: CircuitPlan | null;
	track: CircuitTrack | null;
	samples: SamplesTable;
	/** what the page says, for those who hear it */
	alt: string;
}

const HEIGHTS_PX: Record<RowKey, number> = { brake: 110, speed: 190, throttle: 80, steering: 80 };
const TIME_PX = 110;

/** Turns a comparison into the page of the whole lap. Lines hold what each pixel column can show; a nearer view reads the traces. */
export function lapPage(view: ComparisonView, { speedUnit = 'kmh', date }: CardOptions = {}): LapPage {
	const { driverGrid, referenceGrid, comparison, path, corners } = view;
	const { lengthM, closed } = path;
	const window = { fromM: 0, toM: Math.floor(lengthM), exitGoesOnToM: null };
	const rows = traceRows({
		driver: driverGrid,
		reference: referenceGrid,
		fromM: window.fromM,
		toM: window.toM,
		speedUnit,
		heightsPx: HEIGHTS_PX,
		columnUnits: UNITS_PER_PX
	});
	const gap = { deltaS: comparison.deltaS, text: formatDelta(comparison.deltaS), word: deltaWord(comparison.deltaS) };
	const delta = deltaRow({
		driver: driverGrid,
		reference: referenceGrid,
		windowM: [window.fromM, window.toM],
		spanM: [0, lengthM],
		domain: deltaDomain(driverGrid, referenceGrid, [[0, lengthM]]),
		heightPx: TIME_PX
	});
	const words = gapInWords(view, speedUnit);
	const bands = corners.flatMap((corner): CornerBand[] => {
		const row = comparison.ledger.find(({ corner: number }) => number === corner.number);
		if (corner.number === null || !row) return [];
		const apexM = nearestTurn(corner.apexM, lengthM / 2, lengthM, closed);
		const near = (placeM: number): number =>
			Math.min(window.toM, Math.max(0, nearestTurn(placeM, apexM, lengthM, closed)));
		return [
			{
				number: corner.number,
				call: `${cornerCall(corner)}: ${formatDelta(row.totalS)}`,
				fromM: near(corner.startM),
				apexM,
				toM: near(corner.endM)
			}
		];
	});
	// The cursor waits where the words begin.
	const placeM = Math.round(bands.find(({ number }) => number === words.beginWith)?.apexM ?? lengthM / 2);
	return {
		window,
		lengthM,
		closed,
		speedUnit,
		split: [],
		tags: [],
		slowest: null,
		decimated: true,
		bands,
		rows,
		// To the line itself, which is rarely a whole metre.
		delta: { ...delta, end: gap },
		ruler: rulerView({ ...window, lengthM, closed, marks: [] }),
		cursor: readingAt({ view, rows, speedUnit }, placeM, 0),
		driver: driverLabel(view.driver),
		reference: referenceLabel(view.reference, view.driver, date),
		fairness: view.fairness,
		gap,
		words: words.sentences,
		circuit: circuitPlan(view),
		track: circuitTrack(view),
		samples: samplesTable(view, window, 0, speedUnit),
		alt: `The whole lap: ${gap.text}. ${words.sentences.join(' ')}`
	};
}
