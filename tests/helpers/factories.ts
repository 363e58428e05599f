import './server.ts';
import { randomBytes } from 'node:crypto';
import { encode } from '@auth/core/jwt';
import type { TokenScope } from '../../src/lib/schemas/api.ts';
import type { Role } from '../../src/lib/schemas/views.ts';
import { hashPassword } from '../../src/lib/server/auth/password.ts';
import { hashToken, newSecret, openSession } from '../../src/lib/server/auth/sessions.ts';
import { database } from '../../src/lib/server/db/database.ts';
import { encodePublicId, newPublicId } from '../../src/lib/server/db/publicId.ts';
import { CookieJar } from './cookieJar.ts';

/** People and what belongs to them, made new for each test, so that tests need not clear anything. */

export const PASSWORD = 'brake later, not harder';
let passwordHash: Promise<string> | undefined;

export interface TestPerson {
	id: number;
	publicId: string;
	email: string;
	name: string;
}

export async function makePerson(name = 'Mira Tansley', overrides: { isMinor?: boolean } = {}): Promise<TestPerson> {
	passwordHash ??= hashPassword(PASSWORD);
	const publicId = newPublicId();
	const email = `${name.split(' ')[0].toLowerCase()}.${randomBytes(5).toString('hex')}@example.org`;
	const [id]: number[] = await database()('people').insert({
		public_id: publicId,
		email,
		name,
		password_hash: await passwordHash,
		is_minor: overrides.isMinor ?? false
	});
	return { id, publicId: encodePublicId(publicId), email, name };
}

export async function makeOrganisation(name = 'Fernbank Racing'): Promise<number> {
	const [id]: number[] = await database()('organisations').insert({ public_id: newPublicId(), name });
	return id;
}

export async function addMember(organisationId: number, person: TestPerson, role: Role): Promise<void> {
	await database()('memberships').insert({ organisation_id: organisationId, person_id: person.id, role });
}

export async function addGuardian(guardian: TestPerson, minor: TestPerson): Promise<void> {
	await database()('guardian_links').insert({ guardian_id: guardian.id, minor_id: minor.id, consent_at: new Date() });
}

export interface GrantInput {
	to: TestPerson | number;
	scope?: 'all' | 'circuit' | 'event' | 'run';
	circuitId?: number;
	eventId?: number;
	runId?: number;
	fromAt?: Date;
	revokedAt?: Date;
}

/** @param grant.to a person, or the key of an organisation */
export async function makeGrant(owner: TestPerson, grant: GrantInput): Promise<number> {
	const [id]: number[] = await database()('grants').insert({
		public_id: newPublicId(),
		owner_id: owner.id,
		grantee_person_id: typeof grant.to === 'number' ? null : grant.to.id,
		grantee_organisation_id: typeof grant.to === 'number' ? grant.to : null,
		scope: grant.scope ?? 'all',
		circuit_id: grant.circuitId ?? null,
		event_id: grant.eventId ?? null,
		run_id: grant.runId ?? null,
		...(grant.fromAt && { from_at: grant.fromAt }),
		revoked_at: grant.revokedAt ?? null,
		created_by: owner.id
	});
	return id;
}

/** Cookies of a signed-in person, without going through the form. */
export async function signedIn(person: TestPerson): Promise<CookieJar> {
	const name = 'kerbnote-session';
	const sid = await openSession(database(), person.id, { address: null, userAgent: null });
	const token = await encode({ token: { sid }, secret: process.env.AUTH_SECRET ?? '', salt: name });
	const jar = new CookieJar();
	jar.asCookies().set(name, token);
	return jar;
}

/** Header of a program that holds a token of the person. */
export async function bearer(
	person: TestPerson,
	scopes: TokenScope[],
	expiresAt: Date | null = null
): Promise<{ authorization: string }> {
	const token = newSecret();
	await database()('api_tokens').insert({
		public_id: newPublicId(),
		person_id: person.id,
		name: 'a program',
		token_hash: hashToken(token),
		scopes: JSON.stringify(scopes),
		expires_at: expiresAt
	});
	return { authorization: `Bearer ${token}` };
}
