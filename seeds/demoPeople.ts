import { randomBytes } from 'node:crypto';
import { readFileSync, writeFileSync } from 'node:fs';
import type { Knex } from 'knex';
import { z } from 'zod';
import { hashPassword } from '../src/lib/server/auth/password.ts';
import { newPublicId } from '../src/lib/server/db/publicId.ts';
import type { Role } from '../src/lib/schemas/views.ts';

export interface DemoPerson {
	key: 'rhea' | 'mira' | 'jonas' | 'tomas' | 'ilse';
	name: string;
	email: string;
	/** what a newcomer reads beside the account */
	says: string;
	roles: Role[];
}

/** The invented people of the demo; `.example` is reserved for examples (RFC 2606), so no letter ever reaches anybody. */
export const DEMO_PEOPLE: DemoPerson[] = [
	{ key: 'mira', name: 'Mira Tansley', email: 'mira@fernbank.example', says: 'driver', roles: ['driver'] },
	{ key: 'rhea', name: 'Rhea Calloway', email: 'rhea@fernbank.example', says: 'coach', roles: ['coach'] },
	{ key: 'jonas', name: 'Jonas Velde', email: 'jonas@fernbank.example', says: 'driver', roles: ['driver'] },
	{ key: 'tomas', name: 'Tomas Ruud', email: 'tomas@fernbank.example', says: 'driver', roles: ['driver'] },
	{
		key: 'ilse',
		name: 'Ilse Garrow',
		email: 'ilse@fernbank.example',
		says: 'team manager, reads the outbox at /admin/outbox',
		roles: ['manager', 'admin']
	}
];

/** Runs the site of the demo. */
const SITE_OPERATOR = 'ilse';

export const DEMO_TEAM = 'Fernbank Racing';

const accountsSchema = z.array(
	z.object({ name: z.string(), email: z.string(), password: z.string(), role: z.string() })
);

/** Three groups of four letters and digits that nobody mixes up: about 60 random bits, and easy to type from a screen. */
function newPassword(): string {
	const alphabet = 'abcdefghjkmnpqrstuvwxyz23456789';
	const letters = [...randomBytes(12)].map((byte) => alphabet[byte % alphabet.length]);
	return [0, 4, 8].map((at) => letters.slice(at, at + 4).join('')).join('-');
}

/** What an earlier start wrote, or null where there is nothing that can be used. */
function readAccounts(path: string): z.infer<typeof accountsSchema> | null {
	try {
		const accounts = accountsSchema.parse(JSON.parse(readFileSync(path, 'utf8')));
		return DEMO_PEOPLE.every(({ email }) => accounts.some((account) => account.email === email)) ? accounts : null;
	} catch {
		return null;
	}
}

/**
 * Makes the people of the demo, their team and roles. Passwords are random for each installation and written to a file that
 * only its owner reads; where that file is gone, everybody gets a new one.
 *
 * @param accountsPath file of the accounts, shown when the product starts
 * @returns key of each person in the database
 */
export async function seedPeople(db: Knex, accountsPath: string): Promise<Map<DemoPerson['key'], number>> {
	const known = readAccounts(accountsPath);
	const accounts = DEMO_PEOPLE.map(({ name, email, says }) => ({
		name,
		email,
		password: known?.find((account) => account.email === email)?.password ?? newPassword(),
		role: says
	}));
	const ids = new Map<DemoPerson['key'], number>();
	for (const [i, person] of DEMO_PEOPLE.entries()) {
		const before = await db('people').where({ email: person.email }).first<{ id: number } | undefined>('id');
		if (before && known) {
			ids.set(person.key, before.id);
			continue;
		}
		const password_hash = await hashPassword(accounts[i].password);
		if (before) await db('people').where({ id: before.id }).update({ password_hash });
		const id =
			before?.id ??
			(
				await db('people').insert({
					public_id: newPublicId(),
					email: person.email,
					name: person.name,
					password_hash,
					email_verified_at: db.fn.now(3)
				})
			)[0];
		ids.set(person.key, id);
	}
	// Letters of a demo go nowhere: whoever runs the site reads them in its outbox.
	await db('site_operators')
		.insert({ person_id: ids.get(SITE_OPERATOR) })
		.onConflict('person_id')
		.ignore();
	writeFileSync(accountsPath, JSON.stringify(accounts, null, '\t') + '\n', { mode: 0o600 });
	return ids;
}

/** @returns key of the team in the database */
export async function seedTeam(db: Knex, people: ReadonlyMap<DemoPerson['key'], number>): Promise<number> {
	const before = await db('organisations').where({ name: DEMO_TEAM }).first<{ id: number } | undefined>('id');
	const id = before?.id ?? (await db('organisations').insert({ public_id: newPublicId(), name: DEMO_TEAM }))[0];
	const rows = DEMO_PEOPLE.flatMap(({ key, roles }) =>
		roles.map((role) => ({ organisation_id: id, person_id: people.get(key), role }))
	);
	await db('memberships').insert(rows).onConflict(['organisation_id', 'person_id', 'role']).ignore();
	return id;
}
