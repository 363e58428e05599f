import type { Knex } from 'knex';
import type { GrantScope, InvitationView } from '../../../schemas/invitations.ts';
import type { Role } from '../../../schemas/views.ts';
import { hashToken } from '../../auth/sessions.ts';
import { encodePublicId } from '../../db/publicId.ts';
import { RequestProblem } from '../../http/problem.ts';
import { asksForText } from './asksFor.ts';

export interface OpenInvitation {
	id: number;
	public_id: Buffer;
	email: string;
	inviter_id: number;
	organisation_id: number | null;
	role: Role;
	asked_scope: GrantScope | null;
	asked_circuit_id: number | null;
	asked_event_id: number | null;
	note: string | null;
	expires_at: Date;
	inviter: string;
	organisation: string | null;
	circuit: string | null;
	circuit_public_id: Buffer | null;
	event: string | null;
	event_public_id: Buffer | null;
}

/** The invitation of a link that holds: not answered, not taken back, not run out, of an open account and organisation. */
export function openInvitation(db: Knex | Knex.Transaction, token: string): Knex.QueryBuilder {
	return invitationRows(db)
		.where({ 'invitations.token_hash': hashToken(token), 'invitations.state': 'open' })
		.where('invitations.expires_at', '>', db.raw('CURRENT_TIMESTAMP(3)'))
		.whereNull('inviters.disabled_at')
		.whereNull('organisations.archived_at');
}

/** Invitations with the names in them. */
export function invitationRows(db: Knex | Knex.Transaction): Knex.QueryBuilder {
	return db('invitations')
		.join('people as inviters', 'inviters.id', 'invitations.inviter_id')
		.leftJoin('organisations', 'organisations.id', 'invitations.organisation_id')
		.leftJoin('circuits', 'circuits.id', 'invitations.asked_circuit_id')
		.leftJoin('events', 'events.id', 'invitations.asked_event_id')
		.select('invitations.*', {
			inviter: 'inviters.name',
			organisation: 'organisations.name',
			circuit: 'circuits.name',
			circuit_public_id: 'circuits.public_id',
			event: 'events.name',
			event_public_id: 'events.public_id'
		});
}

/**
 * Locks the invitation until it is answered, so that a link is good once.
 *
 * @throws {RequestProblem} 409 when it holds no more
 */
export async function lockInvitation(trx: Knex.Transaction, token: string): Promise<OpenInvitation> {
	const row = await openInvitation(trx, token).forUpdate().first<OpenInvitation | undefined>();
	if (!row) throw new RequestProblem(409, 'conflict', 'This invitation no longer holds');
	return row;
}

/** What the link shows; null when it does not hold. */
export async function viewInvitation(db: Knex, token: string): Promise<InvitationView | null> {
	const row = await openInvitation(db, token).first<OpenInvitation | undefined>();
	if (!row) return null;
	const account: unknown = await db('people').where({ email: row.email }).first('id');
	return {
		email: row.email,
		inviter: row.inviter,
		organisation: row.organisation,
		role: row.role,
		asksFor: asksForText(row, 'your'),
		proposed: proposedChoice(row),
		note: row.note,
		expiresAt: row.expires_at.toISOString(),
		hasAccount: account !== undefined
	};
}

/** The choice of the form that fits what was asked for. */
function proposedChoice(row: OpenInvitation): string {
	if (row.asked_scope === 'all') return 'all';
	if (row.circuit_public_id) return `circuit:${encodePublicId(row.circuit_public_id)}`;
	if (row.event_public_id) return `event:${encodePublicId(row.event_public_id)}`;
	return 'none';
}
