import { randomInt } from 'node:crypto';
import type { Knex } from 'knex';
import { emailSchema } from '../auth/normaliseEmail.ts';
import { hashPassword } from '../auth/password.ts';
import { revokeAllSessions } from '../auth/sessions.ts';
import { recordAudit } from '../db/auditRepository.ts';
import { encodePublicId, newPublicId } from '../db/publicId.ts';
import { isDuplicate, retryOnDeadlock } from '../db/retryOnDeadlock.ts';

/** What whoever runs the site does to accounts, from a terminal on its machine. */

/** Letters and digits that nobody mistakes for each other. */
const LETTERS = 'abcdefghjkmnpqrstuvwxyz23456789';
const GROUPS = 4;
const GROUP_LENGTH = 5;

/** A password to be read out once and changed: 20 letters, 98 random bits. */
export function newPassword(): string {
	const group = () => Array.from({ length: GROUP_LENGTH }, () => LETTERS[randomInt(LETTERS.length)]).join('');
	return Array.from({ length: GROUPS }, group).join('-');
}

/** What is wrong with a command, in one sentence for a terminal. */
export class PeopleError extends Error {}

function readEmail(text: string): string {
	const parsed = emailSchema.safeParse(text);
	if (!parsed.success) throw new PeopleError(`"${text}" is no e-mail address`);
	return parsed.data;
}

/**
 * Makes an account. The first one of an installation runs the site; later ones do when asked for.
 *
 * @returns its password, which is stored nowhere
 * @throws {PeopleError} when the address is none, or has an account
 */
export async function createPerson(
	db: Knex,
	input: { email: string; name?: string; isOperator?: boolean }
): Promise<{ email: string; password: string; isOperator: boolean }> {
	const email = readEmail(input.email);
	const password = newPassword();
	const passwordHash = await hashPassword(password);
	const publicId = newPublicId();
	try {
		return await retryOnDeadlock(db, async (trx) => {
			const anybody: unknown = await trx('people').first('id');
			const isOperator = input.isOperator || !anybody;
			const name = input.name?.trim() || email.slice(0, email.indexOf('@'));
			const [id]: number[] = await trx('people').insert({
				public_id: publicId,
				email,
				name,
				password_hash: passwordHash
			});
			if (isOperator) await trx('site_operators').insert({ person_id: id });
			await recordAudit(trx, {
				actorId: null,
				action: 'person_created',
				subject: { kind: 'person', id: encodePublicId(publicId) },
				detail: { from: 'terminal', isOperator }
			});
			return { email, password, isOperator };
		});
	} catch (error) {
		if (isDuplicate(error)) throw new PeopleError(`${email} has an account already`);
		throw error;
	}
}

/**
 * Gives an account a new password and ends all its sign-ins.
 *
 * @throws {PeopleError} when there is no such account
 */
export async function resetPassword(db: Knex, emailText: string): Promise<{ email: string; password: string }> {
	const email = readEmail(emailText);
	const password = newPassword();
	const passwordHash = await hashPassword(password);
	await changePerson(db, email, 'password_reset', { password_hash: passwordHash });
	return { email, password };
}

/** Closes an account (nothing is erased) and ends its sign-ins, or opens it again. */
export async function setClosed(db: Knex, emailText: string, isClosed: boolean): Promise<string> {
	const email = readEmail(emailText);
	await changePerson(db, email, isClosed ? 'person_closed' : 'person_opened', {
		disabled_at: isClosed ? new Date() : null
	});
	return email;
}

async function changePerson(
	db: Knex,
	email: string,
	action: string,
	change: { password_hash: string } | { disabled_at: Date | null }
): Promise<void> {
	await retryOnDeadlock(db, async (trx) => {
		const person = await trx('people')
			.where({ email })
			.forUpdate()
			.first<{ id: number; public_id: Buffer } | undefined>('id', 'public_id');
		if (!person) throw new PeopleError(`nobody has the address ${email}`);
		await trx('people').where({ id: person.id }).update(change);
		await revokeAllSessions(trx, person.id);
		await recordAudit(trx, {
			actorId: null,
			action,
			subject: { kind: 'person', id: encodePublicId(person.public_id) },
			detail: { from: 'terminal' }
		});
	});
}
