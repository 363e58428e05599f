import { z } from 'zod';
import { debriefDocumentSchema, type DebriefDocument } from '../../schemas/debrief.ts';
import { ownDebriefs } from '../access/coaching.ts';
import { findViewerOfPerson } from '../access/findViewer.ts';
import { seenRuns } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { hashToken, newSecret } from '../auth/sessions.ts';
import { recordAudit } from '../db/auditRepository.ts';
import { database } from '../db/database.ts';
import { decodePublicId, newPublicId } from '../db/publicId.ts';
import { notFound } from '../http/notFound.ts';
import { RequestProblem } from '../http/problem.ts';
import { getSent } from './debriefsEdit.ts';

const MOST_LINKS = 20;

/**
 * Makes a link that shows one sent debrief to whoever holds it. Only its hash is stored.
 *
 * @returns the path of the shared page, to be shown this once
 * @throws 404 when it is not the viewer's to share: the author's and the driver's it is
 */
export async function makeLink(viewer: Viewer, debriefId: string, days: number): Promise<string> {
	const db = database();
	const row = await getSent(db, viewer, debriefId);
	const [{ held }] = await db('debrief_links')
		.where({ sent_debrief_id: row.sent_id, created_by: viewer.personId })
		.whereNull('revoked_at')
		.whereRaw('expires_at > CURRENT_TIMESTAMP(3)')
		.count<{ held: number }[]>({ held: '*' });
	if (held >= MOST_LINKS) {
		throw new RequestProblem(409, 'conflict', `a debrief has at most ${MOST_LINKS} links`, {
			remedy: 'Revoke one that is no longer used'
		});
	}
	const token = newSecret();
	await db('debrief_links').insert({
		public_id: newPublicId(),
		sent_debrief_id: row.sent_id,
		token_hash: hashToken(token),
		created_by: viewer.personId,
		expires_at: db.raw('CURRENT_TIMESTAMP(3) + INTERVAL ? DAY', [days])
	});
	await recordAudit(db, {
		actorId: viewer.personId,
		action: 'debrief_shared',
		subject: { kind: 'debrief', id: debriefId },
		detail: { days }
	});
	return `/d/${token}`;
}

/**
 * Ends a link: from now on it opens nothing. The driver may end any, others those that they made.
 *
 * @throws 404 when there is no such link of this debrief
 */
export async function revokeLink(viewer: Viewer, debriefId: string, linkId: string): Promise<void> {
	const db = database();
	const row = await getSent(db, viewer, debriefId);
	const links = db('debrief_links')
		.where({ sent_debrief_id: row.sent_id, public_id: decodePublicId(linkId) ?? notFound() })
		.whereNull('revoked_at');
	if (row.is_driver !== 1) void links.where({ created_by: viewer.personId });
	if ((await links.update({ revoked_at: db.raw('CURRENT_TIMESTAMP(3)') })) === 0) notFound();
}

const rowSchema = z.object({
	link_id: z.number(),
	created_by: z.number(),
	debrief_id: z.number(),
	sent_at: z.date(),
	document: debriefDocumentSchema
});

/**
 * What a link shows: the frozen copy and nothing else. A link ends with its time, when it is revoked, and when whoever made it may no
 * longer see the run themselves.
 *
 * @throws 404 in each of these cases, as for a link that never was
 */
export async function openLink(token: string): Promise<{ document: DebriefDocument; sentAt: string }> {
	const db = database();
	const found: unknown = await db('debrief_links')
		.join('sent_debriefs', 'sent_debriefs.id', 'debrief_links.sent_debrief_id')
		.where({ token_hash: hashToken(token) })
		.whereNull('debrief_links.revoked_at')
		.whereRaw('debrief_links.expires_at > CURRENT_TIMESTAMP(3)')
		.first(
			{ link_id: 'debrief_links.id' },
			'debrief_links.created_by',
			'sent_debriefs.debrief_id',
			'sent_debriefs.sent_at',
			'sent_debriefs.document'
		);
	if (found === undefined) notFound();
	const row = rowSchema.parse(found);
	const maker = (await findViewerOfPerson(db, row.created_by)) ?? notFound();
	const holds: unknown = await db('debriefs')
		.join('runs', 'runs.id', 'debriefs.run_id')
		.where({ 'debriefs.id': row.debrief_id })
		.whereNull('debriefs.deleted_at')
		.whereNull('runs.deleted_at')
		.where((mine) => mine.where(seenRuns(db, maker)).orWhere(ownDebriefs(db, maker)))
		.first('debriefs.id');
	if (!holds) notFound();
	await db('debrief_links')
		.where({ id: row.link_id })
		.whereNull('opened_at')
		.update({ opened_at: db.raw('CURRENT_TIMESTAMP(3)') });
	return { document: row.document, sentAt: row.sent_at.toISOString() };
}
