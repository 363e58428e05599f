import type { Knex } from 'knex';
import { formatDay } from '../../format/date.ts';
import { plainText } from '../../format/richText.ts';
import type { DebriefDocument, DebriefView } from '../../schemas/debrief.ts';
import type { Viewer } from '../access/viewer.ts';
import type { FoundDebrief } from '../db/debriefRepository.ts';
import { decodePublicId, encodePublicId } from '../db/publicId.ts';
import type { MailInput } from '../mail/mailKinds.ts';
import { mailSettings } from '../mail/mailSettings.ts';
import { queueMail } from '../mail/queueMail.ts';
import { renderLetter } from '../mail/templates/renderLetter.ts';

const MOST_POINTS = 5;
const LONGEST_POINT = 300;
const LONGEST_PASSAGE = 4000;

/** The letter that goes with a debrief: what the coach opens with, what to do next time, and the way to the rest. */
export function debriefLetter(
	row: Pick<FoundDebrief, 'public_id' | 'driver_id'>,
	{ content, facts }: DebriefDocument
): Extract<MailInput, { kind: 'debriefSent' }> {
	const [where, ...rest] = facts.where.split(' · ');
	const opening = plainText(content.opening).trim().slice(0, LONGEST_PASSAGE);
	return {
		kind: 'debriefSent',
		to: { personId: row.driver_id },
		data: {
			coach: facts.coach,
			run: rest.at(-1) ?? where,
			where: `at ${where}`,
			opening: opening === '' ? null : opening,
			points: content.tasks
				.slice(0, MOST_POINTS)
				.map(({ title, where: at }) => (at === '' ? title : `${title} (${at})`).slice(0, LONGEST_POINT))
				.filter((point) => point.trim() !== ''),
			path: debriefPath(row)
		}
	};
}

/** Puts the letter in the queue, with the debrief or not at all. */
export async function tellOfDebrief(
	trx: Knex.Transaction,
	row: FoundDebrief,
	document: DebriefDocument
): Promise<void> {
	await queueMail(trx, debriefLetter(row, document));
}

/** Tells the other of the two what was answered. */
export async function tellOfAnswer(
	trx: Knex.Transaction,
	viewer: Viewer,
	row: FoundDebrief,
	where: string,
	words: string
): Promise<void> {
	const personId = viewer.personId === row.author_id ? row.driver_id : row.author_id;
	await queueMail(trx, {
		kind: 'reply',
		to: { personId },
		data: {
			from: viewer.name,
			about: `the debrief at ${where}, ${formatDay(row.sort_at)}`,
			words,
			path: debriefPath(row)
		}
	});
}

const debriefPath = ({ public_id }: Pick<FoundDebrief, 'public_id'>) => `/debriefs/${encodePublicId(public_id)}`;

/** The letter as it would go out now, for the coach to look at. */
export function previewLetter({ id, driver, document }: DebriefView): { subject: string; html: string; text: string } {
	const publicId = decodePublicId(id);
	if (!publicId) throw new RangeError(`previewLetter requires the id of a debrief, got ${id}`);
	const input = debriefLetter({ public_id: publicId, driver_id: 1 }, document);
	const { subject, html, text } = renderLetter(input, {
		origin: mailSettings().origin,
		readerName: driver.name,
		unsubscribeUrl: null
	});
	return { subject, html, text };
}
