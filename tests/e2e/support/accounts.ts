import { readFileSync } from 'node:fs';
import { z } from 'zod';

const accountsSchema = z.array(
	z.object({ name: z.string(), email: z.string(), password: z.string(), role: z.string() })
);
export type Account = z.infer<typeof accountsSchema>[number];

/** A person of the demo, with the password that this installation gave them. */
export function accountOf(name: string): Account {
	const path = process.env.KERBNOTE_DEMO_ACCOUNTS;
	if (!path) throw new Error('the journeys require KERBNOTE_DEMO_ACCOUNTS, the path of the demo’s accounts');
	const accounts = accountsSchema.parse(JSON.parse(readFileSync(path, 'utf8')));
	const account = accounts.find((candidate) => candidate.name === name);
	if (!account)
		throw new Error(`the demo requires an account of ${name}, got ${accounts.map((one) => one.name).join(', ')}`);
	return account;
}
