import { shortList } from '../../analysis/compare/shortList.ts';
import type { Advice } from '../../analysis/findings/adviseOn.ts';
import { findingParts } from '../../analysis/findings/findingText.ts';
import { formatDelta } from '../../format/delta.ts';
import { formatDistance } from '../../format/distance.ts';
import type { Finding } from '../../schemas/analysisDocument.ts';
import type { FindingCode } from '../../schemas/codes.ts';
import type { DebriefContent, DebriefSection, DebriefTask } from '../../schemas/debrief.ts';
import type { FocusPoint } from '../../schemas/focus.ts';
import type { ZoneNoteView } from '../../schemas/zoneNote.ts';
import { targetText } from '../../texts/targets.ts';
import { cornerCall, cornerInWords } from '../../view/cornerTitle.ts';
import { groupDigits, habitText } from '../../view/findingLines.ts';
import type { DebriefGround } from './debriefFacts.ts';
import { fillPhrase } from './debriefPhrases.ts';

/** A driver keeps no more than these in mind; the coach adds others where they want to. */
const MOST_CORNERS = 3;
const LINES_EACH = 2;

export interface DraftSources {
	ground: DebriefGround;
	/** notes for this driver on the layout */
	notes: readonly ZoneNoteView[];
	/** open ones on this layout and car */
	focus: readonly FocusPoint[];
	/** the coach's own words by finding; null: how they open */
	phrases: ReadonlyMap<FindingCode | null, string>;
	signature: string;
}

/**
 * Drafts a debrief: the corners of the short list, dearest first, with what was measured there, what the coach says of such a finding
 * (their own phrase, else the exercise, where it may be said at all) and their notes; then the notes that stand elsewhere, and the open
 * focus as what to do next time. The coach judges.
 */
export function draftDebrief(sources: DraftSources): DebriefContent {
	const { ground, notes, focus, phrases, signature } = sources;
	const { view } = ground;
	const [driver] = view.driver.driver.name.split(' ');
	const gap = formatDelta(view.comparison.deltaS);
	const listed = shortList(view.comparison);
	const numbers = [...new Set(listed.map(({ corner }) => corner))]
		.filter((number) => number > 0)
		.slice(0, MOST_CORNERS);
	const noted = [...new Set(notes.flatMap(({ cornerNumber }) => cornerNumber ?? []))].filter(
		(number) => !numbers.includes(number)
	);
	const opening = phrases.get(null);
	return {
		opening:
			opening === undefined
				? `${driver}, ${ground.page.words.sentences.join(' ')}`
				: fillPhrase(opening, { driver, gap }),
		signature,
		sections: [...numbers, ...noted].map((number) => sectionOf(sources, number, listed, driver, gap)),
		tasks: focus.map(taskOf)
	};
}

function sectionOf(
	{ ground, notes, phrases }: DraftSources,
	number: number,
	listed: readonly Finding[],
	driver: string,
	gap: string
): DebriefSection {
	const corner = ground.view.corners.find((one) => one.number === number) ?? { number, name: null };
	const findings = listed.filter((finding) => finding.corner === number).slice(0, LINES_EACH);
	const said = findings.flatMap((finding) => {
		const phrase = phrases.get(finding.code);
		if (phrase !== undefined) return fillPhrase(phrase, { driver, gap, corner: cornerInWords(corner) });
		return drillOf(ground.advice, finding) ?? [];
	});
	const words = notes
		.filter(({ cornerNumber, body }) => cornerNumber === number && body !== '')
		.map(({ body }) => body);
	return {
		key: `corner-${number}`,
		corner: number,
		title: corner.name ?? cornerCall(corner),
		lines: findings.map((finding, i) => ({
			key: `corner-${number}-${i + 1}`,
			code: finding.code,
			text: lineText(finding)
		})),
		// What the coach wrote themselves on this stretch comes before what is only drafted.
		words: [...new Set([...words, ...said])].join('\n\n')
	};
}

function drillOf(advice: readonly Advice[], finding: Finding): string | null {
	return advice.find((one) => one.finding === finding)?.drill ?? null;
}

/** The sentence of a finding, the reference's values set for its pen, and whether it is a habit. */
function lineText(finding: Finding): string {
	const sentence = findingParts(finding)
		.map(({ text, isReference }) => (isReference ? `==${groupDigits(text)}==` : groupDigits(text)))
		.join('');
	const habit = habitText(finding)?.text;
	return habit === undefined ? sentence : `${sentence} ${habit.charAt(0).toUpperCase()}${habit.slice(1)}.`;
}

/** A focus as something to do next time. */
export function taskOf(point: FocusPoint): DebriefTask {
	const text = targetText(point.target);
	const where = [
		point.corner === null ? null : cornerCall({ number: point.corner.number, name: point.corner.name }),
		point.note === null ? null : `${formatDistance(point.note.startM)} to ${formatDistance(point.note.endM)}`
	];
	return {
		key: `focus-${point.id.slice(0, 20)}`,
		focus: point.id,
		title: text.charAt(0).toUpperCase() + text.slice(1),
		where: where.filter((part) => part !== null).join(', ')
	};
}
