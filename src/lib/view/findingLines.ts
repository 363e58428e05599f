import { deltaWord, type DeltaWord } from '../format/delta.ts';
import { formatNumber } from '../format/number.ts';
import { formatUnit } from '../format/unit.ts';
import { capitalise, countOf, figureOf } from '../format/count.ts';
import type { Comparison, Finding } from '../schemas/analysisDocument.ts';
import type { FindingCode } from '../schemas/codes.ts';
import { findingParts, type TextPart } from '../analysis/findings/findingText.ts';
import { countsOnce } from '../analysis/findings/countsOnce.ts';

/** One measured cause as a line on the card. */
export interface FindingLine {
	/** ringed number, from 1; the same stands in the chart. Null for what comes from another corner */
	number: number | null;
	code: FindingCode;
	segments: TextPart[];
	/** "about 0.12 s lost": its share in this corner; null where it has none */
	cost: { text: string; word: DeltaWord } | null;
	/** "another 0.05 s carried on" */
	carriedOn: string | null;
	habit: { shown: number; of: number; isHabit: boolean; text: string } | null;
}

export interface FindingLines {
	lines: FindingLine[];
	/** causes too small for a line of their own, together */
	smaller: { text: string; cost: { text: string; word: DeltaWord } } | null;
	/** the part of the corner that no finding explains; null where it rounds to nothing */
	rest: { text: string; word: DeltaWord } | null;
}

/** A hundredth: what a cost is rounded to, so that less than half of it is nothing. */
const SAYABLE_S = 0.005;
/** A cause gets a line from here, and a card no more lines than these: what is said must be read in a pause between runs. */
const WORTH_A_LINE_S = 0.015;
const MOST_LINES = 5;

/** A finding's cost in the house's setting: two decimals and "about", because it is an estimate. */
export function costText(costS: number): { text: string; word: DeltaWord } {
	const word = deltaWord(costS, 2);
	const amount = formatUnit(Math.abs(costS), 's', { decimals: 2 });
	return { text: word === 'level' ? 'no time' : `about\u00a0${amount}\u00a0${word}`, word };
}

/** What a finding costs within one ledger row. `carried_in` repeats shares of other findings and has none of its own. */
export function ownShareS(finding: Finding, corner: number): number | null {
	if (!countsOnce(finding)) return finding.costS;
	const shares = finding.shares.filter((share) => share.corner === corner);
	return shares.length === 0 ? null : shares.reduce((sum, share) => sum + share.costS, 0);
}

/** A finding of one corner with its share there and the number that stands in its ring. */
export interface OrderedFinding {
	finding: Finding;
	shareS: number;
	number: number | null;
}

/**
 * Findings of a corner in the order in which they are told: what costs the most here first, what differs without a cost last.
 * What is carried in from another corner is told, but it has no ring: its evidence lies elsewhere.
 *
 * @returns `told` get a line each; `smaller` are only summed
 */
export function orderedFindings(
	comparison: Comparison,
	corner: number
): { told: OrderedFinding[]; smaller: OrderedFinding[] } {
	const own = comparison.findings
		.filter((finding) => finding.corner === corner)
		.map((finding) => ({ finding, shareS: ownShareS(finding, corner) ?? 0 }))
		.sort((a, b) => Math.abs(b.shareS) - Math.abs(a.shareS));
	const costly = own.filter(
		({ shareS }, i) => Math.abs(shareS) >= WORTH_A_LINE_S || (i === 0 && Math.abs(shareS) >= SAYABLE_S)
	);
	const costless = own.filter(({ shareS }) => Math.abs(shareS) < SAYABLE_S);
	let number = 0;
	const told = [...costly, ...costless]
		.slice(0, MOST_LINES)
		.map((entry) => ({ ...entry, number: countsOnce(entry.finding) ? ++number : null }));
	const smaller = own
		.filter(({ finding, shareS }) => shareS !== 0 && !told.some((entry) => entry.finding === finding))
		.map((entry) => ({ ...entry, number: null }));
	return { told, smaller };
}

/** Findings of a corner as sentences, then what is left without a cause: shares and rest sum to the corner. */
export function findingLines(comparison: Comparison, corner: number): FindingLines {
	const restS = comparison.unexplained.find((row) => row.corner === corner)?.costS ?? 0;
	const { told, smaller } = orderedFindings(comparison, corner);
	const smallerS = smaller.reduce((sum, { shareS }) => sum + shareS, 0);
	return {
		lines: told.map(({ finding, shareS, number }) => {
			const carriedS = countsOnce(finding) ? (finding.costS ?? 0) - shareS : 0;
			const amount = formatUnit(Math.abs(carriedS), 's', { decimals: 2 });
			return {
				number,
				code: finding.code,
				segments: findingParts(finding).map((part) => ({ ...part, text: groupDigits(part.text) })),
				cost: Math.abs(shareS) < SAYABLE_S ? null : costText(shareS),
				carriedOn:
					Math.abs(carriedS) < SAYABLE_S
						? null
						: carriedS > 0
							? `another ${amount} carried on`
							: `${amount} won back after it`,
				habit: habitText(finding)
			};
		}),
		smaller:
			Math.abs(smallerS) < SAYABLE_S
				? null
				: {
						text: `${capitalise(countOf(smaller.length, 'smaller cause'))}${smaller.length > 1 ? ' together' : ''}`,
						cost: costText(smallerS)
					},
		rest: Math.abs(restS) < SAYABLE_S ? null : costText(restS)
	};
}

/** "habit, 6 of 7 laps", "one-off, 1 of 7 laps", "3 of 7 laps"; null where there are too few clean laps to say. */
export function habitText({ habit, habitLaps }: Pick<Finding, 'habit' | 'habitLaps'>): FindingLine['habit'] {
	if (habitLaps === null || habit === null) return null;
	const { shown, of } = habitLaps;
	const laps = `${shown} of ${figureOf(of, 'lap')}`;
	return { shown, of, isHabit: habit, text: habit ? `habit, ${laps}` : shown <= 1 ? `one-off, ${laps}` : laps };
}

/** Whole numbers from four digits on in groups of three, as everywhere on a page. */
export function groupDigits(text: string): string {
	return text.replace(/(?<![\d.,])\d{4,}/g, (digits) => formatNumber(Number(digits)));
}
