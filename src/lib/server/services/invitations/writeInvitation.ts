import type { Knex } from 'knex';
import type { InviteInput, SentInvitation } from '../../../schemas/invitations.ts';
import type { Role } from '../../../schemas/views.ts';
import { givenRoles, keptInvitations } from '../../access/sharing.ts';
import { seenLayouts } from '../../access/seenLayouts.ts';
import { seenOwners } from '../../access/seenRuns.ts';
import type { Viewer } from '../../access/viewer.ts';
import { normaliseEmail } from '../../auth/normaliseEmail.ts';
import { hashToken, newSecret } from '../../auth/sessions.ts';
import { mayInvite } from '../../auth/throttle.ts';
import { recordAudit } from '../../db/auditRepository.ts';
import { database } from '../../db/database.ts';
import { decodePublicId, encodePublicId, newPublicId } from '../../db/publicId.ts';
import { retryOnDeadlock } from '../../db/retryOnDeadlock.ts';
import { notFound } from '../../http/notFound.ts';
import { RequestProblem } from '../../http/problem.ts';
import { queueMail } from '../../mail/queueMail.ts';
import { asksForText } from './asksFor.ts';

export const INVITATION_DAYS = 14;

/**
 * Asks somebody to join: as a driver of the viewer, or in a role of an organisation that the viewer may give. A letter with the link
 * goes out; the link exists nowhere else. Minors do not invite: their guardian speaks for them.
 *
 * @throws {RequestProblem} 400 with a sentence for the form, 429 after too many in a day
 */
export async function invite(viewer: Viewer, input: InviteInput): Promise<void> {
	const db = database();
	const email = normaliseEmail(input.email);
	if (email === viewer.email) throw refuse('That is your own address. Write the address of whom you invite');
	await checkAdult(db, viewer);
	const role = input.as && findRole(viewer, input.as);
	const asked = await findAsked(db, viewer, input);
	if (!(await mayInvite(db, viewer.personId))) throw throttled();
	await retryOnDeadlock(db, async (trx) => {
		const organisationId = role?.organisation.organisationId ?? null;
		const open: unknown = await trx('invitations')
			.where({ email, inviter_id: viewer.personId, organisation_id: organisationId, state: 'open' })
			.where('expires_at', '>', trx.raw('CURRENT_TIMESTAMP(3)'))
			.first('id');
		if (open) throw refuse(`${email} has an open invitation from you. Send it again from the list below`);
		const publicId = newPublicId();
		const [id]: number[] = await trx('invitations').insert({
			public_id: publicId,
			// A place holder that no link leads to: `sendLink` writes the real one.
			token_hash: hashToken(newSecret()),
			email,
			inviter_id: viewer.personId,
			organisation_id: organisationId,
			role: role?.role ?? 'driver',
			asked_scope: input.asksFor.scope === 'none' ? null : input.asksFor.scope,
			asked_circuit_id: asked.circuitId,
			asked_event_id: asked.eventId,
			note: input.note,
			expires_at: new Date()
		});
		await sendLink(trx, id);
		await recordAudit(trx, {
			actorId: viewer.personId,
			action: 'invitation_sent',
			subject: { kind: 'invitation', id: encodePublicId(publicId) },
			detail: { organisation: organisationId, role: role?.role ?? null }
		});
	});
}

/**
 * Sends an invitation that was not answered again, with a new link; the one before holds no more.
 *
 * @throws 404 for an invitation of anybody else, or one that was answered
 */
export async function sendAgain(viewer: Viewer, invitationId: string): Promise<void> {
	const db = database();
	const id = await getOpen(db, viewer, invitationId);
	if (!(await mayInvite(db, viewer.personId))) throw throttled();
	await retryOnDeadlock(db, (trx) => sendLink(trx, id));
}

/** Takes an invitation back: its link holds no more. */
export async function withdraw(viewer: Viewer, invitationId: string): Promise<void> {
	const db = database();
	const id = await getOpen(db, viewer, invitationId);
	await retryOnDeadlock(db, async (trx) => {
		await trx('invitations').where({ id, state: 'open' }).update({ state: 'withdrawn' });
		await recordAudit(trx, {
			actorId: viewer.personId,
			action: 'invitation_withdrawn',
			subject: { kind: 'invitation', id: invitationId }
		});
	});
}

async function getOpen(db: Knex, viewer: Viewer, invitationId: string): Promise<number> {
	const row = await db('invitations')
		.where({ public_id: decodePublicId(invitationId) ?? notFound(), state: 'open' })
		.where(keptInvitations(db, viewer))
		.first<{ id: number } | undefined>('id');
	return row?.id ?? notFound();
}

/** A new link, and the letter that carries it. */
async function sendLink(trx: Knex.Transaction, id: number): Promise<void> {
	const token = newSecret();
	const expiresAt = new Date(Date.now() + INVITATION_DAYS * 86_400_000);
	const row = await trx('invitations')
		.join('people', 'people.id', 'invitations.inviter_id')
		.leftJoin('organisations', 'organisations.id', 'invitations.organisation_id')
		.leftJoin('circuits', 'circuits.id', 'invitations.asked_circuit_id')
		.leftJoin('events', 'events.id', 'invitations.asked_event_id')
		.where('invitations.id', id)
		.first<{
			email: string;
			role: Role;
			note: string | null;
			asked_scope: Parameters<typeof asksForText>[0]['asked_scope'];
			inviter: string;
			organisation: string | null;
			circuit: string | null;
			event: string | null;
		}>('invitations.email', 'invitations.role', 'invitations.note', 'invitations.asked_scope', {
			inviter: 'people.name',
			organisation: 'organisations.name',
			circuit: 'circuits.name',
			event: 'events.name'
		});
	const [mailId] = await queueMail(trx, {
		kind: 'invitation',
		to: { email: row.email },
		data: {
			inviter: row.inviter,
			organisation: row.organisation,
			role: row.role,
			asksFor: asksForText(row, 'your'),
			note: row.note,
			path: `/join/${token}`,
			expiresAt: expiresAt.toISOString()
		}
	});
	await trx('invitations')
		.where({ id })
		.update({
			token_hash: hashToken(token),
			expires_at: expiresAt,
			mail_public_id: mailId === undefined ? null : decodePublicId(mailId)
		});
}

/** Invitations that were not accepted, newest first; those that were taken back are gone from sight. */
export async function listSent(db: Knex, viewer: Viewer): Promise<SentInvitation[]> {
	const rows = await db('invitations')
		.leftJoin('organisations', 'organisations.id', 'invitations.organisation_id')
		.leftJoin('mail_log', 'mail_log.public_id', 'invitations.mail_public_id')
		.where(keptInvitations(db, viewer))
		.whereIn('invitations.state', ['open', 'waiting_guardian', 'declined'])
		.orderBy('invitations.id', 'desc')
		.limit(100)
		.select<
			{
				public_id: Buffer;
				email: string;
				role: Role;
				organisation: string | null;
				state: 'open' | 'waiting_guardian' | 'declined';
				mail_state: string | null;
				expires_at: Date;
				created_at: Date;
			}[]
		>(
			'invitations.public_id',
			'invitations.email',
			'invitations.role',
			'invitations.state',
			'invitations.expires_at',
			'invitations.created_at',
			{
				organisation: 'organisations.name',
				mail_state: 'mail_log.state'
			}
		);
	return rows.map((row) => ({
		id: encodePublicId(row.public_id),
		email: row.email,
		as: row.organisation === null ? null : { organisation: row.organisation, role: row.role },
		state: row.state === 'open' && row.expires_at.getTime() <= Date.now() ? 'expired' : row.state,
		bounced: row.mail_state === 'bounced' || row.mail_state === 'failed',
		expiresAt: row.expires_at.toISOString(),
		createdAt: row.created_at.toISOString()
	}));
}

const refuse = (message: string) => new RequestProblem(400, 'invalid_input', message);
const throttled = () =>
	new RequestProblem(429, 'throttled', 'You have sent many invitations today. Send the next ones tomorrow');

async function checkAdult(db: Knex, viewer: Viewer): Promise<void> {
	const person = await db('people').where({ id: viewer.personId }).first<{ is_minor: number }>('is_minor');
	if (person.is_minor === 1) throw refuse('Your guardian invites people for you');
}

function findRole(viewer: Viewer, wish: { organisation: string; role: Role }) {
	const given = givenRoles(viewer).find(
		({ organisation, role }) => organisation.organisationPublicId === wish.organisation && role === wish.role
	);
	if (!given) throw refuse('This role is not yours to give');
	return given;
}

/** A circuit must be one that the viewer sees, an event one of their organisations. */
async function findAsked(
	db: Knex,
	viewer: Viewer,
	{ asksFor }: InviteInput
): Promise<{ circuitId: number | null; eventId: number | null }> {
	const nothing = { circuitId: null, eventId: null };
	if (asksFor.id === null) return nothing;
	const publicId = decodePublicId(asksFor.id);
	if (asksFor.scope === 'circuit') {
		const circuit = await db('layouts')
			.join('circuits', 'circuits.id', 'layouts.circuit_id')
			.where({ 'circuits.public_id': publicId })
			.where(seenLayouts(db, viewer, await seenOwners(db, viewer)))
			.first<{ id: number } | undefined>('circuits.id');
		if (circuit) return { ...nothing, circuitId: circuit.id };
	}
	if (asksFor.scope === 'event') {
		const event = await db('events')
			.where({ public_id: publicId })
			.whereIn(
				'organisation_id',
				viewer.memberships.map(({ organisationId }) => organisationId)
			)
			.first<{ id: number } | undefined>('id');
		if (event) return { ...nothing, eventId: event.id };
	}
	throw refuse('Choose what you would like to see');
}
