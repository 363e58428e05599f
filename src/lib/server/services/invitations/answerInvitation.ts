import type { Knex } from 'knex';
import type { Sees } from '../../../schemas/invitations.ts';
import { keptPeople } from '../../access/seenRuns.ts';
import type { Viewer } from '../../access/viewer.ts';
import { recordAudit } from '../../db/auditRepository.ts';
import { database } from '../../db/database.ts';
import { decodePublicId, encodePublicId } from '../../db/publicId.ts';
import { retryOnDeadlock } from '../../db/retryOnDeadlock.ts';
import { RequestProblem } from '../../http/problem.ts';
import { giveGrant } from './grants.ts';
import { askGuardian } from './guardianRequests.ts';
import { lockInvitation, type OpenInvitation } from './openInvitation.ts';
import { findPlace } from './shareOptions.ts';

/**
 * Accepts an invitation with an account that is there: the viewer's own, or that of a minor in their care. A minor who accepts
 * by themself asks their guardian by it.
 *
 * @param of id of whose laps it is about; the viewer's own when absent
 * @returns `waiting` when a guardian has to agree first
 * @throws {RequestProblem} 400 with a sentence for the form, 409 when the invitation holds no more
 */
export async function acceptInvitation(
	viewer: Viewer,
	token: string,
	sees: Sees,
	of?: string
): Promise<'accepted' | 'waiting'> {
	const db = database();
	const ownerId = await findOwner(db, viewer, of);
	return await retryOnDeadlock(db, async (trx) => {
		const invitation = await lockInvitation(trx, token);
		if (invitation.inviter_id === ownerId || invitation.inviter_id === viewer.personId) {
			throw new RequestProblem(400, 'invalid_input', 'That is your own invitation. Sign in as whom you invited');
		}
		const owner = await trx('people').where({ id: ownerId }).first<{ is_minor: number }>('is_minor');
		if (owner.is_minor === 1) refuseRole(invitation);
		if (owner.is_minor === 1 && ownerId === viewer.personId) {
			const guardian = await trx('guardian_links')
				.join('people', 'people.id', 'guardian_links.guardian_id')
				.where({ minor_id: ownerId })
				.whereNull('guardian_links.ended_at')
				.whereNotNull('people.email')
				.first<{ email: string } | undefined>('people.email');
			if (!guardian)
				throw new RequestProblem(400, 'invalid_input', 'An account of somebody under 18 needs a guardian first');
			await askGuardian(trx, { minorId: ownerId, email: guardian.email, invitation, sees, opensAccount: false });
			return 'waiting';
		}
		await settleInvitation(trx, invitation, { actorId: viewer.personId, ownerId, sees });
		return 'accepted';
	});
}

async function findOwner(db: Knex, viewer: Viewer, of: string | undefined): Promise<number> {
	if (of === undefined || of === viewer.publicId) return viewer.personId;
	const person = await db('people')
		.where({ public_id: decodePublicId(of) })
		.whereIn('id', await keptPeople(db, viewer))
		.first<{ id: number } | undefined>('id');
	if (!person) throw new RequestProblem(400, 'invalid_input', 'Choose whose laps it is about');
	return person.id;
}

/** Somebody under 18 drives; coaching and managing others is for adults. */
export function refuseRole({ role }: Pick<OpenInvitation, 'role'>): void {
	if (role === 'driver') return;
	throw new RequestProblem(400, 'invalid_input', 'This role is for adults');
}

/**
 * Carries out what was agreed: the role in the organisation, what may be seen, and that the invitation is used.
 *
 * @param agreed.actorId who agreed: the owner of the laps, or their guardian
 */
export async function settleInvitation(
	trx: Knex.Transaction,
	invitation: OpenInvitation,
	agreed: { actorId: number; ownerId: number; sees: Sees }
): Promise<void> {
	const { actorId, ownerId, sees } = agreed;
	const asked = { circuitId: invitation.asked_circuit_id, eventId: invitation.asked_event_id };
	const place = await findPlace(trx, ownerId, sees, asked);
	if (place === undefined) throw new RequestProblem(400, 'invalid_input', 'Choose what they may see');
	if (invitation.organisation_id !== null) {
		await trx('memberships')
			.insert({ organisation_id: invitation.organisation_id, person_id: ownerId, role: invitation.role })
			.onConflict(['organisation_id', 'person_id', 'role'])
			.merge({ ended_at: null });
	}
	if (place !== null) {
		const to =
			invitation.organisation_id === null
				? { personId: invitation.inviter_id, organisationId: null }
				: { personId: null, organisationId: invitation.organisation_id };
		await giveGrant(trx, actorId, ownerId, to, place);
	}
	await trx('invitations')
		.where({ id: invitation.id })
		.update({ state: 'accepted', answered_by: ownerId, answered_at: trx.raw('CURRENT_TIMESTAMP(3)') });
	await recordAudit(trx, {
		actorId,
		action: 'invitation_accepted',
		subject: { kind: 'invitation', id: encodePublicId(invitation.public_id) },
		detail: { owner: ownerId }
	});
}

/** Says no. The inviter learns that much; whoever holds the link may, with or without an account. */
export async function declineInvitation(db: Knex, token: string, actorId: number | null): Promise<void> {
	await retryOnDeadlock(db, async (trx) => {
		const invitation = await lockInvitation(trx, token);
		await trx('invitations')
			.where({ id: invitation.id })
			.update({ state: 'declined', answered_by: actorId, answered_at: trx.raw('CURRENT_TIMESTAMP(3)') });
		await recordAudit(trx, {
			actorId,
			action: 'invitation_declined',
			subject: { kind: 'invitation', id: encodePublicId(invitation.public_id) }
		});
	});
}
