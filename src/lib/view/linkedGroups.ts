import type { TextPart } from '../analysis/findings/findingText.ts';
import { deltaWord, formatDelta, type DeltaWord } from '../format/delta.ts';
import type { ComparisonView, CornerView } from '../schemas/views.ts';
import { cornerCall, cornerInWords } from './cornerTitle.ts';
import { findingLines } from './findingLines.ts';

/** Corners that lead into each other, judged as one: what the first gives away the next may pay back. */
export interface LinkedGroup {
	corners: { number: number; call: string; text: string; word: DeltaWord }[];
	/** what they cost together */
	total: { deltaS: number; text: string; word: DeltaWord };
	/** "Time is given away in Tern Hairpin for Weir, and that does not pay." */
	verdict: string;
	/** the largest cause among them, and where it is; empty where there is none */
	cause: TextPart[];
}

/** A corner counts as lost or found within its group from here. */
const CLEAR_S = 0.01;

/** Chains of linked corners, each two corners or more, in lap order. */
export function linkedGroups(view: Pick<ComparisonView, 'corners' | 'comparison'>): LinkedGroup[] {
	return chains(view.corners).map((chain) => groupOf(view, chain));
}

/** Numbered corners that lead on to the next one, gathered; a chain that spans the line begins before it. */
function chains(corners: readonly CornerView[]): CornerView[][] {
	const numbered = corners.filter((corner) => corner.number !== null);
	const byNumber = new Map(numbered.map((corner) => [corner.number, corner]));
	const ledTo = new Set(numbered.map((corner) => corner.linkedTo).filter((number) => number !== null));
	return numbered
		.filter((corner) => corner.linkedTo !== null && !ledTo.has(corner.number ?? 0))
		.map((first) => {
			const chain = [first];
			for (let next = byNumber.get(first.linkedTo); next && !chain.includes(next); next = byNumber.get(next.linkedTo))
				chain.push(next);
			return chain;
		})
		.filter((chain) => chain.length > 1);
}

function groupOf({ comparison }: Pick<ComparisonView, 'comparison'>, chain: CornerView[]): LinkedGroup {
	const members = chain.map((corner) => {
		const deltaS = comparison.ledger.find((row) => row.corner === corner.number)?.totalS ?? 0;
		return { corner, deltaS };
	});
	const totalS = members.reduce((sum, { deltaS }) => sum + deltaS, 0);
	const worst = members.reduce((a, b) => (Math.abs(b.deltaS) > Math.abs(a.deltaS) ? b : a));
	const line = findingLines(comparison, worst.corner.number ?? 0).lines.find(({ number }) => number !== null);
	return {
		corners: members.map(({ corner, deltaS }) => ({
			number: corner.number ?? 0,
			call: cornerCall(corner),
			text: formatDelta(deltaS),
			word: deltaWord(deltaS)
		})),
		total: { deltaS: totalS, text: formatDelta(totalS), word: deltaWord(totalS) },
		verdict: verdictOf(members, totalS),
		cause: line ? [{ text: `${cornerInWords(worst.corner)}: `, isReference: false }, ...line.segments] : []
	};
}

function verdictOf(members: { corner: CornerView; deltaS: number }[], totalS: number): string {
	const lost = members.filter(({ deltaS }) => deltaS >= CLEAR_S);
	const found = members.filter(({ deltaS }) => deltaS <= -CLEAR_S);
	const names = (of: typeof members): string => of.map(({ corner }) => cornerInWords(corner)).join(' and ');
	if (lost.length === 0 && found.length === 0) return 'Nothing here sets the two laps apart: leave it as it is.';
	if (found.length === 0)
		return lost.length === members.length
			? 'Each costs time by itself: begin with the first, for it hands its speed on.'
			: `All of it is lost in ${names(lost)}.`;
	if (lost.length === 0) return `Time is found in ${names(found)}: keep it.`;
	const firstLoses = members.indexOf(lost[0]) < members.indexOf(found[0]);
	const paid = deltaWord(totalS, 2) === 'lost' ? 'and that does not pay' : 'and that pays';
	return firstLoses
		? `Time is given away in ${names(lost)} for ${names(found)}, ${paid}.`
		: `Time is gained in ${names(found)} at the cost of ${names(lost)}, ${paid}.`;
}
