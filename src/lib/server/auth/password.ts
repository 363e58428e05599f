import { hash, verify } from '@node-rs/argon2';

/**
 * argon2id at OWASP's first recommendation (Password Storage Cheat Sheet, from memory): 19 MiB, two passes, one lane.
 * About 30 ms of one core, which is why sign-in is throttled.
 */
const COST = { memoryCost: 19456, timeCost: 2, parallelism: 1 };

/** A password longer than this is refused before it is hashed. */
export const LONGEST_PASSWORD = 256;
export const SHORTEST_PASSWORD = 10;

export async function hashPassword(password: string): Promise<string> {
	if (password.length > LONGEST_PASSWORD) {
		throw new RangeError(`hashPassword requires at most ${LONGEST_PASSWORD} characters, got ${password.length}`);
	}
	return await hash(password.normalize('NFKC'), COST);
}

let anybody: Promise<string> | undefined;

/**
 * Takes the same time for an account that does not exist (`stored` null), so that the clock does not tell who has one.
 */
export async function verifyPassword(stored: string | null, password: string): Promise<boolean> {
	if (password.length > LONGEST_PASSWORD) return false;
	anybody ??= hashPassword('nobody signs in with this');
	const matches = await verify(stored ?? (await anybody), password.normalize('NFKC'));
	return stored !== null && matches;
}
