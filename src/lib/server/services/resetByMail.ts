import type { Knex } from 'knex';
import { emailSchema } from '../auth/normaliseEmail.ts';
import { hashPassword } from '../auth/password.ts';
import { hashToken, newSecret, revokeAllSessions } from '../auth/sessions.ts';
import { mayAskForReset } from '../auth/throttle.ts';
import { recordAudit } from '../db/auditRepository.ts';
import { encodePublicId } from '../db/publicId.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { finish, enqueue, holdJob, type ClaimedJob } from '../jobs/jobQueue.ts';
import { queueMail } from '../mail/queueMail.ts';

export const RESET_VALID_MINUTES = 60;

/**
 * Somebody wants a new password for an address. Answers the same, and does the same work, whether anybody has it: the letter is
 * written by the worker.
 *
 * @returns what the person may be told; nothing about accounts
 */
export async function askForReset(
	db: Knex,
	emailText: string,
	address: string
): Promise<'asked' | 'no_address' | 'throttled'> {
	const email = emailSchema.safeParse(emailText);
	if (!email.success) return 'no_address';
	if (!(await mayAskForReset(db, email.data, address))) return 'throttled';
	const person = await db('people')
		.where({ email: email.data })
		.whereNull('disabled_at')
		.first<{ id: number } | undefined>('id');
	await enqueue(db, 'writeReset', { personId: person?.id ?? null });
	return 'asked';
}

/** Makes the link and queues its letter; the link exists nowhere else. */
export async function writeReset(db: Knex, job: ClaimedJob, { personId }: { personId: number | null }): Promise<void> {
	const token = newSecret();
	await retryOnDeadlock(db, async (trx) => {
		await holdJob(trx, job);
		if (personId !== null) {
			await trx('password_resets').insert({
				person_id: personId,
				token_hash: hashToken(token),
				expires_at: trx.raw('CURRENT_TIMESTAMP(3) + INTERVAL ? MINUTE', [RESET_VALID_MINUTES])
			});
			await queueMail(trx, {
				kind: 'passwordReset',
				to: { personId },
				data: { path: `/reset/${token}`, validMinutes: RESET_VALID_MINUTES }
			});
		}
		await finish(trx, job);
	});
}

/** Does the link hold: known, not used, not run out, of an open account. */
export async function resetHolds(db: Knex, token: string): Promise<boolean> {
	return (await openReset(db, token)) !== undefined;
}

/**
 * Sets the password that a person chose by a link, which is used up then, with every other link of theirs, and ends all their
 * sign-ins.
 *
 * @param password checked by `newPasswordSchema`
 * @returns false when the link does not hold
 */
export async function redeemReset(db: Knex, token: string, password: string, address: string | null): Promise<boolean> {
	// Before the costly hash: a link that never was costs nothing.
	if (!(await resetHolds(db, token))) return false;
	const password_hash = await hashPassword(password);
	return await retryOnDeadlock(db, async (trx) => {
		const reset = await openReset(trx, token).forUpdate();
		if (!reset) return false;
		await trx('people')
			.where({ id: reset.person_id })
			.update({
				password_hash,
				// Whoever holds the link reads what is sent to the address.
				email_verified_at: trx.raw('COALESCE(email_verified_at, CURRENT_TIMESTAMP(3))')
			});
		await trx('password_resets')
			.where({ person_id: reset.person_id })
			.whereNull('used_at')
			.update({ used_at: trx.raw('CURRENT_TIMESTAMP(3)') });
		await revokeAllSessions(trx, reset.person_id);
		await recordAudit(trx, {
			actorId: reset.person_id,
			action: 'password_reset',
			subject: { kind: 'person', id: encodePublicId(reset.public_id) },
			detail: { from: 'letter' },
			address
		});
		return true;
	});
}

function openReset(db: Knex | Knex.Transaction, token: string) {
	return db('password_resets')
		.join('people', 'people.id', 'password_resets.person_id')
		.where({ token_hash: hashToken(token) })
		.whereNull('used_at')
		.where('expires_at', '>', db.raw('CURRENT_TIMESTAMP(3)'))
		.whereNull('people.disabled_at')
		.first<{ person_id: number; public_id: Buffer } | undefined>('person_id', 'people.public_id');
}
