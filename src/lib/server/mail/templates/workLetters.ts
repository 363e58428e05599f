import { countOf, capitalise } from '../../../format/count.ts';
import { formatDay } from '../../../format/date.ts';
import { formatDelta } from '../../../format/delta.ts';
import { formatLapTime } from '../../../format/lapTime.ts';
import type { MailData } from '../mailKinds.ts';
import { hand, text, type LetterModel } from './letterModel.ts';

const CHOSEN = 'You get this letter because you asked for letters of this kind.';

export function runAnalysedLetter({
	driver,
	own,
	run,
	where,
	timedLaps,
	bestLapS,
	path
}: MailData<'runAnalysed'>): LetterModel {
	const whose = own ? 'Your run' : `${driver}’s run`;
	const best = bestLapS === null ? 'None of them can be timed.' : `The best took ${formatLapTime(bestLapS)}.`;
	return {
		subject: `${whose} ${where} is read: ${run}`,
		title: `${whose} is read`,
		parts: [text(`${run}, ${where}: ${countOf(timedLaps, 'timed lap')}. ${timedLaps === 0 ? '' : best}`.trim())],
		action: { label: 'Open the run', path },
		after: null,
		why: CHOSEN
	};
}

export function debriefSentLetter({ coach, run, where, opening, points, path }: MailData<'debriefSent'>): LetterModel {
	return {
		subject: `${coach} wrote your debrief: ${run}, ${where}`,
		title: 'Your debrief',
		parts: [
			text(`${coach} looked at ${run}, ${where}.`),
			...(opening === null ? [] : [hand(opening, coach)]),
			...(points.length === 0
				? []
				: [
						text(points.length === 1 ? 'For the next run:' : 'For the next run, in this order:'),
						{ kind: 'list' as const, items: points }
					])
		],
		action: { label: 'Read the debrief', path },
		after:
			'For closed circuits and simulators. Drive within your limits and the circuit’s rules; this does not replace a licensed instructor, the event’s marshals or the car maker’s limits.',
		why: `You get this letter because ${coach} coaches you.`
	};
}

export function replyLetter({ from, about, words, path }: MailData<'reply'>): LetterModel {
	return {
		subject: `${from} answered ${about}`,
		title: `${from} answered`,
		parts: [text(`About ${about}:`), hand(words, from)],
		action: { label: 'Read it in its place', path },
		after: null,
		why: `You get this letter because ${from} answered something of yours.`
	};
}

export function focusMetLetter({
	driver,
	own,
	corner,
	target,
	hits,
	laps,
	paidS,
	path
}: MailData<'focusMet'>): LetterModel {
	const who = own ? 'You' : driver;
	const paid = paidS === null ? [] : [text(`Corner time against before: ${formatDelta(paidS)}.`)];
	return {
		subject: `${own ? 'Focus met' : `${driver} met a focus`}: corner ${corner}`,
		title: own ? 'You met a focus' : `${driver} met a focus`,
		parts: [text(`Corner ${corner}: ${target}. ${who} met it on ${hits} of ${countOf(laps, 'lap')}.`), ...paid],
		action: { label: 'Look at the corner', path },
		after: null,
		why: own
			? 'You get this letter because it is your focus.'
			: `You get this letter because ${driver} lets you see it.`
	};
}

export function weeklySummaryLetter({ from, lines, path }: MailData<'weeklySummary'>): LetterModel {
	return {
		subject: `Your week from ${formatDay(from)}: ${countOf(lines.length, 'line')}`,
		title: capitalise(`the week from ${formatDay(from)}`),
		parts: [{ kind: 'list', items: lines }],
		action: { label: 'Open Kerbnote', path },
		after: null,
		why: CHOSEN
	};
}
