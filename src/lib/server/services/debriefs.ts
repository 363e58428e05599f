import type { Knex } from 'knex';
import type { DebriefDocument, DebriefHead, DebriefView } from '../../schemas/debrief.ts';
import { layoutName } from '../../texts/runs.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import {
	getSentDocument,
	listDebriefReplies,
	listFoundDebriefs,
	listLinks,
	debriefKeys,
	seenDebriefRows,
	toDebriefHead,
	type FoundDebrief
} from '../db/debriefRepository.ts';
import { decodePublicId, encodePublicId } from '../db/publicId.ts';
import { conflict } from '../http/conflict.ts';
import { notFound } from '../http/notFound.ts';
import { factsFor, loadDebriefGround } from './debriefFacts.ts';

const MOST_DEBRIEFS = 100;

/** Debriefs that the viewer writes or received, what was touched last first. */
export async function loadDebriefs(viewer: Viewer): Promise<DebriefHead[]> {
	const found = await listFoundDebriefs(
		seenDebriefRows(database(), viewer)
			.where((mine) => mine.where('debriefs.author_id', viewer.personId).orWhereNotNull('debriefs.sent_at'))
			.orderBy([
				{ column: 'debriefs.updated_at', order: 'desc' },
				{ column: 'debriefs.id', order: 'desc' }
			])
			.limit(MOST_DEBRIEFS)
	);
	return found.map((row) => toDebriefHead(row, viewer, whereOf(row)));
}

/**
 * A debrief: while it is written, on the laps as they lie now; once sent, the frozen copy.
 *
 * @throws 404 when there is no such debrief, or the viewer may not see it
 */
export async function loadDebrief(viewer: Viewer, debriefId: string): Promise<DebriefView> {
	const db = database();
	const row = await getDebrief(db, viewer, debriefId);
	const head = debriefKeys(row, viewer);
	const isAuthor = row.author_id === viewer.personId;
	if (row.sent_id === null) {
		const document = await liveDocument(viewer, row);
		return { ...head, document, replies: [], ticked: [], links: [], mayEdit: isAuthor, isDriver: row.is_driver === 1 };
	}
	const [document, replies, ticked, links] = await Promise.all([
		getSentDocument(db, row.sent_id),
		listDebriefReplies(db, viewer, row.sent_id),
		db('debrief_ticks').where({ sent_debrief_id: row.sent_id }).orderBy('item').pluck<string[]>('item'),
		listLinks(db, viewer, row.sent_id)
	]);
	return { ...head, document, replies, ticked, links, mayEdit: false, isDriver: row.is_driver === 1 };
}

export async function getDebrief(db: Knex, viewer: Viewer, debriefId: string): Promise<FoundDebrief> {
	const publicId = decodePublicId(debriefId) ?? notFound();
	const [row] = await listFoundDebriefs(seenDebriefRows(db, viewer).where('debriefs.public_id', publicId));
	return row ?? notFound();
}

/** What the coach writes, on the laps as they lie now. */
export async function liveDocument(viewer: Viewer, row: FoundDebrief): Promise<DebriefDocument> {
	const { lap_public_id: lap, reference_public_id: reference, content } = row;
	if (!lap || !reference) conflict('conflict', 'A lap that this debrief stands on is gone. Write another on the run.');
	const { facts } = await loadDebriefGround(viewer, encodePublicId(lap), encodePublicId(reference), row.author_name);
	return {
		content,
		facts: factsFor(
			facts,
			content.sections.map(({ corner }) => corner)
		)
	};
}

/** "Vallmere Park, grand prix" */
export function whereOf(row: Pick<FoundDebrief, 'circuit_name' | 'layout_name'>): string {
	return layoutName({ name: row.layout_name, circuit: { id: '', name: row.circuit_name } });
}
