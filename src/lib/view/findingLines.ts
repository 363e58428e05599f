import { deltaWord, type DeltaWord } from '../format/delta.ts';
import { formatUnit } from '../format/unit.ts';
import { figureOf } from '../format/count.ts';
import type { Comparison, Finding } from '../schemas/analysisDocument.ts';
import type { FindingCode } from '../schemas/codes.ts';
import { markReference, type Segment } from './markReference.ts';

/** One measured cause as a line on the card. */
export interface FindingLine {
	/** ringed number, from 1; the same stands in the chart */
	number: number;
	code: FindingCode;
	segments: Segment[];
	/** "about 0.12 s lost": its share in this corner; null where it has none */
	cost: { text: string; word: DeltaWord } | null;
	/** "another 0.05 s carried on" */
	carriedOn: string | null;
	habit: { shown: number; of: number; text: string } | null;
}

export interface FindingLines {
	lines: FindingLine[];
	/** the part of the corner that no finding explains; null where it rounds to nothing */
	rest: { text: string; word: DeltaWord } | null;
}

/** A hundredth: what a cost is rounded to, so that less than half of it is nothing. */
const SAYABLE_S = 0.005;

/** A finding's cost in the house's setting: two decimals and "about", because it is an estimate. */
export function costText(costS: number): { text: string; word: DeltaWord } {
	const word = deltaWord(costS, 2);
	const amount = formatUnit(Math.abs(costS), 's', { decimals: 2 });
	return { text: word === 'level' ? 'no time' : `about\u00a0${amount}\u00a0${word}`, word };
}

/** What a finding costs within one ledger row. `carried_in` repeats shares of other findings and has none of its own. */
export function ownShareS(finding: Finding, corner: number): number | null {
	if (finding.shares.length === 0) return finding.costS;
	const shares = finding.shares.filter((share) => share.corner === corner);
	return shares.length === 0 ? null : shares.reduce((sum, share) => sum + share.costS, 0);
}

/** Findings of a corner, largest share first, as sentences; then what is left without a cause. */
export function findingLines(comparison: Comparison, corner: number): FindingLines {
	const own = comparison.findings
		.filter((finding) => finding.corner === corner)
		.map((finding) => ({ finding, shareS: ownShareS(finding, corner) }))
		.sort((a, b) => Math.abs(b.shareS ?? b.finding.costS ?? 0) - Math.abs(a.shareS ?? a.finding.costS ?? 0));
	const restS = comparison.unexplained.find((row) => row.corner === corner)?.costS ?? 0;
	return {
		lines: own.map(({ finding, shareS }, i) => {
			const carriedS = (finding.costS ?? 0) - (shareS ?? 0);
			return {
				number: i + 1,
				code: finding.code,
				segments: markReference(withoutStop(finding.text), finding.evidence),
				cost: shareS === null ? null : costText(shareS),
				carriedOn:
					shareS !== null && carriedS >= SAYABLE_S
						? `another ${formatUnit(carriedS, 's', { decimals: 2 })} carried on`
						: null,
				habit: habitText(finding)
			};
		}),
		rest: Math.abs(restS) < SAYABLE_S ? null : costText(restS)
	};
}

/** "habit, 6 of 7 laps", "one-off, 1 of 7 laps", "3 of 7 laps"; null where there are too few clean laps to say. */
export function habitText({ habit, habitLaps }: Pick<Finding, 'habit' | 'habitLaps'>): FindingLine['habit'] {
	if (habitLaps === null || habit === null) return null;
	const { shown, of } = habitLaps;
	const laps = `${shown} of ${figureOf(of, 'lap')}`;
	return { shown, of, text: habit ? `habit, ${laps}` : shown <= 1 ? `one-off, ${laps}` : laps };
}

function withoutStop(text: string): string {
	return text.trim().replace(/\.$/, '');
}
