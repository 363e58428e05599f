import type { Knex } from 'knex';
import type { AccountInput } from '../../../schemas/invitations.ts';
import { hashPassword } from '../../auth/password.ts';
import { mayMakeAccount } from '../../auth/throttle.ts';
import { recordAudit } from '../../db/auditRepository.ts';
import { encodePublicId, newPublicId } from '../../db/publicId.ts';
import { isDuplicate, retryOnDeadlock } from '../../db/retryOnDeadlock.ts';
import { RequestProblem } from '../../http/problem.ts';
import { refuseRole, settleInvitation } from './answerInvitation.ts';
import { askGuardian } from './guardianRequests.ts';
import { lockInvitation, openInvitation, type OpenInvitation } from './openInvitation.ts';

/**
 * Makes the account of a newcomer and accepts the invitation with it. Whoever holds the link reads what is sent to the address, so
 * the address counts as checked. Somebody under 18 gets a closed account, which their guardian opens.
 *
 * @param password checked by `newPasswordSchema`
 * @throws {RequestProblem} 400 with a sentence for the form, 409 when the invitation holds no more, 429
 */
export async function joinByInvitation(
	db: Knex,
	token: string,
	account: AccountInput,
	password: string,
	address: string
): Promise<'joined' | 'waiting'> {
	const isMinor = account.age === 'under';
	// Before the costly hash: a link that never was costs nothing.
	const open = await openInvitation(db, token).first<OpenInvitation | undefined>();
	if (open && isMinor && account.guardianEmail === open.email) {
		throw new RequestProblem(400, 'invalid_input', 'Your guardian needs an address of their own');
	}
	if (!open) throw new RequestProblem(409, 'conflict', 'This invitation no longer holds');
	if (isMinor) refuseRole(open);
	if (!(await mayMakeAccount(db, address))) throw new RequestProblem(429, 'throttled', 'Too many accounts from here');
	const passwordHash = await hashPassword(password);
	const sees = account.sees ?? { scope: 'none' as const, id: null };
	return await retryOnDeadlock(db, async (trx) => {
		const invitation = await lockInvitation(trx, token);
		const person = await makePerson(trx, {
			email: invitation.email,
			name: account.name,
			passwordHash,
			isMinor,
			isClosed: isMinor
		});
		if (isMinor) {
			await askGuardian(trx, {
				minorId: person,
				email: account.guardianEmail,
				invitation,
				sees,
				opensAccount: true
			});
			return 'waiting';
		}
		await settleInvitation(trx, invitation, { actorId: person, ownerId: person, sees });
		return 'joined';
	});
}

/**
 * @returns key of the new person
 * @throws {RequestProblem} 400 when the address has an account
 */
export async function makePerson(
	trx: Knex.Transaction,
	person: { email: string; name: string; passwordHash: string; isMinor: boolean; isClosed: boolean }
): Promise<number> {
	const publicId = newPublicId();
	try {
		const [id]: number[] = await trx('people').insert({
			public_id: publicId,
			email: person.email,
			name: person.name,
			password_hash: person.passwordHash,
			is_minor: person.isMinor,
			email_verified_at: trx.raw('CURRENT_TIMESTAMP(3)'),
			disabled_at: person.isClosed ? trx.raw('CURRENT_TIMESTAMP(3)') : null
		});
		await recordAudit(trx, {
			actorId: id,
			action: 'person_created',
			subject: { kind: 'person', id: encodePublicId(publicId) },
			detail: { from: 'invitation', isMinor: person.isMinor }
		});
		return id;
	} catch (error) {
		if (!isDuplicate(error)) throw error;
		throw new RequestProblem(400, 'invalid_input', `${person.email} has an account already. Sign in with it`);
	}
}
