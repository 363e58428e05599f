import type { Knex } from 'knex';
import { seesSchema, seesText, type GuardianView, type Sees } from '../../../schemas/invitations.ts';
import type { Viewer } from '../../access/viewer.ts';
import { hashPassword } from '../../auth/password.ts';
import { hashToken, newSecret } from '../../auth/sessions.ts';
import { mayMakeAccount } from '../../auth/throttle.ts';
import { recordAudit } from '../../db/auditRepository.ts';
import { database } from '../../db/database.ts';
import { encodePublicId } from '../../db/publicId.ts';
import { retryOnDeadlock } from '../../db/retryOnDeadlock.ts';
import { RequestProblem } from '../../http/problem.ts';
import { queueMail } from '../../mail/queueMail.ts';
import { settleInvitation } from './answerInvitation.ts';
import { makePerson } from './joinByInvitation.ts';
import { invitationRows, type OpenInvitation } from './openInvitation.ts';

const REQUEST_DAYS = 14;

/** Asks the guardian whom a minor named; until then nothing is opened and nothing shared. */
export async function askGuardian(
	trx: Knex.Transaction,
	request: { minorId: number; email: string; invitation: OpenInvitation; sees: Sees; opensAccount: boolean }
): Promise<void> {
	const { minorId, email, invitation, sees, opensAccount } = request;
	const token = newSecret();
	const expiresAt = new Date(Date.now() + REQUEST_DAYS * 86_400_000);
	const minor = await trx('people').where({ id: minorId }).first<{ name: string }>('name');
	await trx('guardian_requests').insert({
		token_hash: hashToken(token),
		minor_id: minorId,
		invitation_id: invitation.id,
		email,
		opens_account: opensAccount,
		sees: seesText(sees),
		expires_at: expiresAt
	});
	await trx('invitations').where({ id: invitation.id }).update({ state: 'waiting_guardian', answered_by: minorId });
	await queueMail(trx, {
		kind: 'guardianConsent',
		to: { email },
		data: {
			minor: minor.name,
			inviter: invitation.organisation ?? invitation.inviter,
			asksFor: sharesText(sees, invitation),
			path: `/join/${token}`,
			expiresAt: expiresAt.toISOString()
		}
	});
}

/** What a minor chose to share, in the words of a sentence about them. */
function sharesText({ scope }: Sees, { circuit, event }: Pick<OpenInvitation, 'circuit' | 'event'>): string | null {
	switch (scope) {
		case 'none':
			return null;
		case 'all':
			return 'all their runs';
		case 'circuit':
			return `their runs at ${circuit ?? 'one circuit'}`;
		case 'event':
			return `their runs of ${event ?? 'one event'}`;
		case 'run':
			return 'one of their runs';
	}
}

interface RequestRow {
	id: number;
	minor_id: number;
	invitation_id: number;
	email: string;
	opens_account: number;
	sees: string;
	expires_at: Date;
	minor: string;
	minor_public_id: Buffer;
}

function openRequest(db: Knex | Knex.Transaction, token: string): Knex.QueryBuilder {
	return db('guardian_requests')
		.join('people', 'people.id', 'guardian_requests.minor_id')
		.where({ 'guardian_requests.token_hash': hashToken(token) })
		.whereNull('answered_at')
		.where('expires_at', '>', db.raw('CURRENT_TIMESTAMP(3)'))
		.select('guardian_requests.*', { minor: 'people.name', minor_public_id: 'people.public_id' });
}

/** What a guardian's link shows; null when it does not hold. */
export async function viewGuardianRequest(db: Knex, token: string): Promise<GuardianView | null> {
	const request = await openRequest(db, token).first<RequestRow | undefined>();
	if (!request) return null;
	const [invitation, account] = await Promise.all([
		getInvitation(db, request),
		db('people').where({ email: request.email }).first<{ id: number } | undefined>('id')
	]);
	return {
		email: request.email,
		minor: request.minor,
		inviter: invitation.inviter,
		organisation: invitation.organisation,
		shares: sharesText(seesSchema.parse(request.sees), invitation),
		expiresAt: request.expires_at.toISOString(),
		hasAccount: account !== undefined
	};
}

async function getInvitation(db: Knex | Knex.Transaction, request: RequestRow): Promise<OpenInvitation> {
	return await invitationRows(db).where({ 'invitations.id': request.invitation_id }).first<OpenInvitation>();
}

/**
 * The guardian agrees, with an account that is there: from now on they keep the minor's laps, and what the minor chose is shared.
 *
 * @throws {RequestProblem} 400 for a minor, 409 when the link holds no more
 */
export async function agreeAsGuardian(viewer: Viewer, token: string): Promise<void> {
	await retryOnDeadlock(database(), (trx) => agree(trx, token, viewer.personId));
}

/** The guardian agrees and gets an account by it: the link shows that they read what is sent to the address. */
export async function joinAsGuardian(
	db: Knex,
	token: string,
	account: { name: string; password: string },
	address: string
): Promise<void> {
	const request = await openRequest(db, token).first<RequestRow | undefined>();
	if (!request) throw gone();
	if (!(await mayMakeAccount(db, address))) throw new RequestProblem(429, 'throttled', 'Too many accounts from here');
	const passwordHash = await hashPassword(account.password);
	await retryOnDeadlock(db, async (trx) => {
		const { email } = request;
		const guardian = await makePerson(trx, {
			email,
			name: account.name,
			passwordHash,
			isMinor: false,
			isClosed: false
		});
		await agree(trx, token, guardian);
	});
}

async function agree(trx: Knex.Transaction, token: string, guardianId: number): Promise<void> {
	const request = await openRequest(trx, token).forUpdate().first<RequestRow | undefined>();
	if (!request) throw gone();
	const guardian = await trx('people').where({ id: guardianId }).first<{ is_minor: number }>('is_minor');
	if (guardian.is_minor === 1 || guardianId === request.minor_id) {
		throw new RequestProblem(400, 'invalid_input', 'A guardian is an adult with an account of their own');
	}
	await trx('guardian_links')
		.insert({ guardian_id: guardianId, minor_id: request.minor_id, consent_at: trx.raw('CURRENT_TIMESTAMP(3)') })
		.onConflict(['guardian_id', 'minor_id'])
		.merge({ consent_at: trx.raw('CURRENT_TIMESTAMP(3)'), ended_at: null });
	if (request.opens_account === 1) await trx('people').where({ id: request.minor_id }).update({ disabled_at: null });
	await close(trx, request);
	await settleInvitation(trx, await getInvitation(trx, request), {
		actorId: guardianId,
		ownerId: request.minor_id,
		sees: seesSchema.parse(request.sees)
	});
	await recordAudit(trx, {
		actorId: guardianId,
		action: 'guardian_agreed',
		subject: { kind: 'person', id: encodePublicId(request.minor_public_id) }
	});
}

/** The guardian says no: an account that was made for this goes again, and with it all that its owner wrote. */
export async function refuseAsGuardian(db: Knex, token: string): Promise<void> {
	await retryOnDeadlock(db, async (trx) => {
		const request = await openRequest(trx, token).forUpdate().first<RequestRow | undefined>();
		if (!request) throw gone();
		await close(trx, request);
		await trx('invitations').where({ id: request.invitation_id }).update({ state: 'declined' });
		await recordAudit(trx, {
			actorId: null,
			action: 'guardian_refused',
			subject: { kind: 'person', id: encodePublicId(request.minor_public_id) }
		});
		if (request.opens_account === 1) await trx('people').where({ id: request.minor_id }).delete();
	});
}

const close = (trx: Knex.Transaction, { id }: RequestRow) =>
	trx('guardian_requests')
		.where({ id })
		.update({ answered_at: trx.raw('CURRENT_TIMESTAMP(3)') });

const gone = () => new RequestProblem(409, 'conflict', 'This link no longer holds');

/** Accounts that wait for a guardian who did not answer go again, and their invitation may be sent anew. */
export async function sweepGuardianRequests(db: Knex): Promise<void> {
	const requests = await db('guardian_requests')
		.whereNull('answered_at')
		.where('expires_at', '<', db.raw('CURRENT_TIMESTAMP(3)'))
		.limit(1000)
		.select<RequestRow[]>('*');
	for (const request of requests) {
		await retryOnDeadlock(db, async (trx) => {
			await close(trx, request);
			await trx('invitations')
				.where({ id: request.invitation_id, state: 'waiting_guardian' })
				.update({ state: 'open', answered_by: null });
			// Only while it is still closed: nobody opened it by another way.
			if (request.opens_account === 1) {
				await trx('people').where({ id: request.minor_id }).whereNotNull('disabled_at').delete();
			}
		});
	}
}
