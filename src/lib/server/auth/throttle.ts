import { createHash } from 'node:crypto';
import type { Knex } from 'knex';
import { RateLimiterMySQL, RateLimiterRes } from 'rate-limiter-flexible';

/** So many tries in so long, for each key; counted in the database, so that all nodes share them. */
interface Limit {
	name: string;
	points: number;
	durationS: number;
}

/** From one place at one account: what somebody needs who mistypes, not what somebody needs who guesses. */
const ACCOUNT_AT_ADDRESS: Limit = { name: 'sign-in-pair', points: 8, durationS: 15 * 60 };
/** From one place at all accounts. */
const ADDRESS: Limit = { name: 'sign-in-address', points: 60, durationS: 15 * 60 };
/** At one account from everywhere; high, because otherwise anybody could lock somebody out. */
const ACCOUNT: Limit = { name: 'sign-in-account', points: 100, durationS: 60 * 60 };
/** Raw uploads of one person. */
const UPLOADS: Limit = { name: 'upload', points: 200, durationS: 60 * 60 };

/** Letters with a link for one address, from everywhere, and from one place for all: nobody's letter-box is filled through us. */
const RESETS_OF_ADDRESS: Limit = { name: 'reset-account', points: 5, durationS: 60 * 60 };
const RESETS_FROM_PLACE: Limit = { name: 'reset-address', points: 30, durationS: 60 * 60 };
/** Invitations that one person writes. */
const INVITATIONS: Limit = { name: 'invite', points: 40, durationS: 24 * 60 * 60 };
/** Accounts made from one place. */
const ACCOUNTS: Limit = { name: 'join-address', points: 20, durationS: 60 * 60 };

const limiters = new WeakMap<Knex, Map<string, RateLimiterMySQL>>();

function limiterOf(db: Knex, limit: Limit): RateLimiterMySQL {
	const known = limiters.get(db) ?? new Map<string, RateLimiterMySQL>();
	limiters.set(db, known);
	let limiter = known.get(limit.name);
	if (!limiter) {
		limiter = new RateLimiterMySQL({
			storeClient: db,
			storeType: 'knex',
			dbName: databaseName(db),
			tableName: 'throttle_counters',
			tableCreated: true,
			// Old rows are swept by the worker, not by a timer in every server.
			clearExpiredByTimeout: false,
			keyPrefix: limit.name,
			points: limit.points,
			duration: limit.durationS
		});
		known.set(limit.name, limiter);
	}
	return limiter;
}

function databaseName(db: Knex): string {
	const { connection } = db.client.config as Knex.Config;
	if (typeof connection !== 'object' || !('database' in connection) || typeof connection.database !== 'string') {
		throw new Error('throttle requires a pool whose configuration names its database');
	}
	return connection.database;
}

/** Takes one try; false when there is none left. */
async function take(db: Knex, limit: Limit, key: string): Promise<boolean> {
	try {
		await limiterOf(db, limit).consume(key);
		return true;
	} catch (refusal) {
		if (refusal instanceof RateLimiterRes) return false;
		throw refusal;
	}
}

/** Keys hold no e-mail address in the clear, and no character that the column does not know. */
const keyOf = (...parts: string[]): string => createHash('sha256').update(parts.join('\n')).digest('base64url');

/**
 * Counts a try to sign in before the password is looked at, so that many at once count too.
 *
 * @returns false when this place or this account has tried too often
 */
export async function maySignIn(db: Knex, email: string, address: string): Promise<boolean> {
	const taken = await Promise.all([
		take(db, ACCOUNT_AT_ADDRESS, keyOf(email, address)),
		take(db, ADDRESS, keyOf(address)),
		take(db, ACCOUNT, keyOf(email))
	]);
	return taken.every(Boolean);
}

/** After a right password the tries before it are forgotten, for this account at this place. */
export async function forgetTries(db: Knex, email: string, address: string): Promise<void> {
	await limiterOf(db, ACCOUNT_AT_ADDRESS).delete(keyOf(email, address));
	await limiterOf(db, ACCOUNT).delete(keyOf(email));
	await limiterOf(db, ADDRESS).reward(keyOf(address), 1);
}

/** Counts an upload. */
export async function mayUpload(db: Knex, personId: number): Promise<boolean> {
	return await take(db, UPLOADS, String(personId));
}

/** Counts a wish for a new password: for the address that it is about, and for the place that it comes from. */
export async function mayAskForReset(db: Knex, email: string, address: string): Promise<boolean> {
	const taken = await Promise.all([
		take(db, RESETS_OF_ADDRESS, keyOf(email)),
		take(db, RESETS_FROM_PLACE, keyOf(address))
	]);
	return taken.every(Boolean);
}

/** Counts an invitation of a person, sent or sent again. */
export async function mayInvite(db: Knex, personId: number): Promise<boolean> {
	return await take(db, INVITATIONS, String(personId));
}

/** Counts an account that is made from a place. */
export async function mayMakeAccount(db: Knex, address: string): Promise<boolean> {
	return await take(db, ACCOUNTS, keyOf(address));
}

/** Removes counters that ran out. */
export async function sweepThrottle(db: Knex): Promise<number> {
	return await db('throttle_counters').where('expire', '<', Date.now()).delete();
}
