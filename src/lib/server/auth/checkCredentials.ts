import type { Knex } from 'knex';
import { z } from 'zod';
import { encodePublicId } from '../db/publicId.ts';
import { normaliseEmail } from './normaliseEmail.ts';
import { LONGEST_PASSWORD, verifyPassword } from './password.ts';
import { forgetTries, maySignIn } from './throttle.ts';

const credentialsSchema = z.object({
	email: z.string().min(1).max(320),
	password: z.string().min(1).max(LONGEST_PASSWORD)
});

export type CredentialsAnswer =
	| { outcome: 'right'; personId: number; publicId: string; name: string }
	| { outcome: 'wrong' }
	| { outcome: 'throttled' };

/**
 * Is this the person's password. Counts the try first, takes the same time for an account that does not exist, and says
 * the same for a wrong password, an unknown account and a closed one.
 *
 * @param address from where, for the throttle
 */
export async function checkCredentials(db: Knex, input: unknown, address: string): Promise<CredentialsAnswer> {
	const parsed = credentialsSchema.safeParse(input);
	if (!parsed.success) return { outcome: 'wrong' };
	const email = normaliseEmail(parsed.data.email);
	if (!(await maySignIn(db, email, address))) return { outcome: 'throttled' };
	const person = await db('people')
		.where({ email })
		.first<
			| { id: number; public_id: Buffer; name: string; password_hash: string | null; disabled_at: Date | null }
			| undefined
		>('id', 'public_id', 'name', 'password_hash', 'disabled_at');
	const isRight = await verifyPassword(person?.password_hash ?? null, parsed.data.password);
	if (!person || !isRight || person.disabled_at) return { outcome: 'wrong' };
	await forgetTries(db, email, address);
	return { outcome: 'right', personId: person.id, publicId: encodePublicId(person.public_id), name: person.name };
}
