import type { ProfileInput } from '../../schemas/settings.ts';
import type { Viewer } from '../access/viewer.ts';
import { recordAudit } from '../db/auditRepository.ts';
import { database } from '../db/database.ts';
import { decodePublicId } from '../db/publicId.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { notFound } from '../http/notFound.ts';

/** Writes down the person's name and how figures are set for them; preferences that the form does not hold stay as they are. */
export async function changeProfile(viewer: Viewer, { name, ...preferences }: ProfileInput): Promise<void> {
	const db = database();
	await db('people')
		.where({ id: viewer.personId })
		.update({ name, preferences: JSON.stringify({ ...viewer.preferences, ...preferences }) });
}

/**
 * Ends one of the person's sign-ins, also the one that asks.
 *
 * @throws 404 for a sign-in of anybody else, as for one that never was
 */
export async function endSignIn(viewer: Viewer, signInId: string): Promise<void> {
	const db = database();
	const ended = await db('sign_in_sessions')
		.where({ person_id: viewer.personId, public_id: decodePublicId(signInId) ?? notFound() })
		.whereNull('revoked_at')
		.update({ revoked_at: db.raw('CURRENT_TIMESTAMP(3)') });
	if (ended === 0) notFound();
	await recordAudit(db, { actorId: viewer.personId, action: 'sign_in_ended' });
}

/** Ends every sign-in of the person but the one that asks. */
export async function endOtherSignIns(viewer: Viewer): Promise<void> {
	const db = database();
	await retryOnDeadlock(db, async (trx) => {
		const others = trx('sign_in_sessions').where({ person_id: viewer.personId }).whereNull('revoked_at');
		if (viewer.sessionId !== null) others.whereNot({ id: viewer.sessionId });
		const ended = await others.update({ revoked_at: trx.raw('CURRENT_TIMESTAMP(3)') });
		await recordAudit(trx, { actorId: viewer.personId, action: 'other_sign_ins_ended', detail: { ended } });
	});
}
