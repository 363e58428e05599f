import type { DateFormat } from '../format/date.ts';
import { countOf } from '../format/count.ts';
import { deltaWord, formatDelta, type DeltaWord } from '../format/delta.ts';
import { formatUnit } from '../format/unit.ts';
import type { SpeedUnit } from '../format/speed.ts';
import type { ComparisonView, Fairness } from '../schemas/views.ts';
import { circuitPlan, type CircuitPlan } from './circuitPlan.ts';
import { commonDomain } from './cornerCard.ts';
import { cornerCall } from './cornerTitle.ts';
import { gapInWords, type GapInWords } from './gapInWords.ts';
import { driverLabel, referenceLabel, type LapLabel } from './lapLabels.ts';
import { ledgerView, type LedgerView } from './ledgerView.ts';
import { linkedGroups, type LinkedGroup } from './linkedGroups.ts';
import { miniCard, type MiniCard } from './miniCard.ts';

export interface CompareOptions {
	speedUnit?: SpeedUnit;
	date?: DateFormat;
}

/** Everything that the compare page shows, as text, places and path data. */
export interface ComparePage {
	driver: LapLabel;
	reference: LapLabel;
	own: boolean;
	gap: { deltaS: number; text: string; word: DeltaWord };
	words: GapInWords;
	fairness: Fairness[];
	ledger: LedgerView;
	circuit: CircuitPlan | null;
	/** corners that lead into each other, in lap order */
	linked: LinkedGroup[];
	/** in lap order */
	cards: MiniCard[];
	/** corner numbers, worst first */
	groups: {
		lost: CardGroup;
		found: CardGroup;
		level: { withinText: string; corners: { number: number; call: string }[] };
	};
}

export interface CardGroup {
	corners: number[];
	/** "six corners, 1.248 s" */
	text: string;
}

/** A corner gets a card of its own from here, and no more than so many on either side. */
const WORTH_A_CARD_S = 0.01;
const MOST_LOST = 6;
const MOST_FOUND = 3;

/** Turns a comparison into the compare page. */
export function comparePage(view: ComparisonView, { speedUnit = 'kmh', date }: CompareOptions = {}): ComparePage {
	const { comparison } = view;
	const rows = comparison.ledger.filter((row) => row.corner > 0);
	const domain = commonDomain(view);
	const lost = rows
		.filter((row) => row.totalS >= WORTH_A_CARD_S)
		.sort((a, b) => b.totalS - a.totalS)
		.slice(0, MOST_LOST);
	const found = rows
		.filter((row) => row.totalS <= -WORTH_A_CARD_S)
		.sort((a, b) => a.totalS - b.totalS)
		.slice(0, MOST_FOUND);
	const rest = rows.filter((row) => !lost.includes(row) && !found.includes(row));
	const group = (of: typeof rows): CardGroup => {
		const sum = of.reduce((total, row) => total + Math.abs(row.totalS), 0);
		return {
			corners: of.map((row) => row.corner),
			text: `${countOf(of.length, 'corner')}, ${formatUnit(sum, 's', { decimals: 3 })}`
		};
	};
	const within = Math.max(0, ...rest.map((row) => Math.abs(row.totalS)));
	return {
		driver: driverLabel(view.driver),
		reference: referenceLabel(view.reference, view.driver, date),
		own: view.driver.own,
		gap: { deltaS: comparison.deltaS, text: formatDelta(comparison.deltaS), word: deltaWord(comparison.deltaS) },
		words: gapInWords(view, speedUnit),
		fairness: view.fairness,
		ledger: ledgerView(comparison, view.corners),
		circuit: circuitPlan(view),
		linked: linkedGroups(view),
		cards: rows.map((row) => miniCard(view, row.corner, domain)).filter((card) => card !== null),
		groups: {
			lost: group(lost),
			found: group(found),
			level: {
				withinText: formatUnit(Math.max(0.01, Math.ceil(within * 100) / 100), 's', { decimals: 2 }),
				corners: rest.map((row) => ({
					number: row.corner,
					call: cornerCall(view.corners.find((c) => c.number === row.corner) ?? { number: row.corner, name: null })
				}))
			}
		}
	};
}
