import { createHash, randomBytes } from 'node:crypto';
import type { Knex } from 'knex';
import { newPublicId } from '../db/publicId.ts';

/** A sign-in ends after this long, whatever happens … */
export const SESSION_DAYS = 30;
/** … and sooner when nobody comes back. */
export const IDLE_DAYS = 14;
/** `last_seen_at` is written at most this often: a read must not cost a write. */
export const SEEN_STEP_S = 300;

const SECRET_BYTES = 32;

/** SHA-256: enough for a value of 256 random bits, and fast enough for every request. */
export function hashToken(token: string): Buffer {
	return createHash('sha256').update(token, 'utf8').digest();
}

/** A value that nobody guesses, as a cookie or a header can carry it. */
export function newSecret(): string {
	return randomBytes(SECRET_BYTES).toString('base64url');
}

export interface SignInPlace {
	address: string | null;
	userAgent: string | null;
}

/**
 * Opens a sign-in session.
 *
 * @returns the value for the cookie; only its hash is stored
 */
export async function openSession(db: Knex, personId: number, place: SignInPlace): Promise<string> {
	const secret = newSecret();
	await db('sign_in_sessions').insert({
		public_id: newPublicId(),
		person_id: personId,
		token_hash: hashToken(secret),
		expires_at: db.raw('CURRENT_TIMESTAMP(3) + INTERVAL ? DAY', [SESSION_DAYS]),
		user_agent: place.userAgent?.slice(0, 255) ?? null,
		address: place.address
	});
	return secret;
}

/** Ends a session: from now on every copy of its cookie is refused. Ending it twice, or one that never was, changes nothing. */
export async function revokeSession(db: Knex, secret: string): Promise<void> {
	await db('sign_in_sessions')
		.where({ token_hash: hashToken(secret) })
		.whereNull('revoked_at')
		.update({ revoked_at: db.raw('CURRENT_TIMESTAMP(3)') });
}

/** Ends every session of a person, as after a change of password. */
export async function revokeAllSessions(db: Knex, personId: number): Promise<void> {
	await db('sign_in_sessions')
		.where({ person_id: personId })
		.whereNull('revoked_at')
		.update({ revoked_at: db.raw('CURRENT_TIMESTAMP(3)') });
}

/** Does the session hold: neither revoked nor run out, of an open account. */
export async function sessionHolds(db: Knex, secret: string): Promise<boolean> {
	const row = await db('sign_in_sessions')
		.join('people', 'people.id', 'sign_in_sessions.person_id')
		.where({ token_hash: hashToken(secret) })
		.whereNull('people.disabled_at')
		.whereRaw(SESSION_HOLDS, [IDLE_DAYS])
		.first<{ id: number } | undefined>('sign_in_sessions.id');
	return row !== undefined;
}

/** Condition on `sign_in_sessions`; one binding: `IDLE_DAYS`. */
export const SESSION_HOLDS = `sign_in_sessions.revoked_at IS NULL AND sign_in_sessions.expires_at > CURRENT_TIMESTAMP(3)
	AND sign_in_sessions.last_seen_at > CURRENT_TIMESTAMP(3) - INTERVAL ? DAY`;
