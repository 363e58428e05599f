import '../helpers/server.ts';
import { afterAll, describe, expect, it } from 'vitest';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { CookieJar } from '../helpers/cookieJar.ts';
import { makePerson, PASSWORD, signedIn } from '../helpers/factories.ts';
import { testRequest } from '../helpers/testRequest.ts';

afterAll(closeDatabase);

const COOKIE = 'kerbnote-session';

function signIn(
	email: string,
	password: string,
	jar: CookieJar,
	more: { address?: string; redirectTo?: string; origin?: string } = {}
) {
	const form = new URLSearchParams({
		email,
		password,
		providerId: 'credentials',
		redirectTo: more.redirectTo ?? '/notebook'
	});
	return testRequest('/sign-in', {
		method: 'POST',
		body: form.toString(),
		headers: { 'content-type': 'application/x-www-form-urlencoded' },
		jar,
		address: more.address,
		origin: more.origin
	});
}

describe('signing in', () => {
	it('opens the notebook with the right password, however the address is written', async () => {
		const person = await makePerson();
		const jar = new CookieJar();
		const response = await signIn(`  ${person.email.toUpperCase()} `, PASSWORD, jar);
		expect([302, 303]).toContain(response.status);
		expect(response.headers.get('location')).toBe('/notebook');
		expect(jar.get(COOKIE)).toBeTruthy();
		expect((await testRequest('/api/v1/runs', { jar })).status).toBe(200);
	});

	it.each([
		{ name: 'a wrong password', password: 'not this one at all' },
		{ name: 'an empty password', password: '' },
		{ name: 'a password of a megabyte', password: 'x'.repeat(100_000) }
	])('refuses $name and sets no cookie', async ({ password }) => {
		const person = await makePerson();
		const jar = new CookieJar();
		const response = await signIn(person.email, password, jar);
		expect(response.status).toBe(401);
		expect(await response.text()).toContain('"code":"wrong"');
		expect(jar.get(COOKIE)).toBeUndefined();
	});

	it('says the same of an unknown account and of a closed one', async () => {
		const closed = await makePerson();
		await database()('people').where({ id: closed.id }).update({ disabled_at: new Date() });
		for (const email of ['nobody@example.org', closed.email]) {
			const response = await signIn(email, PASSWORD, new CookieJar(), { address: '10.9.9.9' });
			expect(response.status).toBe(401);
			expect(await response.text()).toContain('"code":"wrong"');
		}
	});

	it('takes as long for an unknown account as for a wrong password', async () => {
		const person = await makePerson();
		const timed = async (email: string) => {
			const times: number[] = [];
			for (let i = 0; i < 5; i++) {
				const startMs = performance.now();
				await signIn(email, 'wrong password', new CookieJar(), { address: `10.8.0.${i}` });
				times.push(performance.now() - startMs);
			}
			// The quickest of five: what the work costs when nothing else wants the machine.
			return Math.min(...times);
		};
		const known = await timed(person.email);
		const unknown = await timed('nobody.else@example.org');
		expect(unknown).toBeGreaterThan(known * 0.25);
		expect(known).toBeGreaterThan(unknown * 0.25);
	});

	it('lets nobody guess: after eight wrong passwords from one place even the right one waits', async () => {
		const person = await makePerson();
		const address = '10.1.2.3';
		for (let i = 0; i < 8; i++) {
			expect((await signIn(person.email, `guess number ${i}`, new CookieJar(), { address })).status).toBe(401);
		}
		const jar = new CookieJar();
		const response = await signIn(person.email, PASSWORD, jar, { address });
		expect(response.status).toBe(429);
		expect(await response.text()).toContain('"code":"throttled"');
		expect(jar.get(COOKIE)).toBeUndefined();
		const elsewhere = new CookieJar();
		await signIn(person.email, PASSWORD, elsewhere, { address: '10.3.2.1' });
		expect(elsewhere.get(COOKIE)).toBeTruthy();
	});

	it('counts tries that come all at once', async () => {
		const person = await makePerson();
		const answers = await Promise.all(
			Array.from({ length: 16 }, (_, i) => signIn(person.email, `guess ${i}`, new CookieJar(), { address: '10.4.4.4' }))
		);
		expect(answers.filter(({ status }) => status === 401).length).toBeLessThanOrEqual(8);
		expect(answers.filter(({ status }) => status === 429).length).toBeGreaterThanOrEqual(8);
	});

	it('forgets the tries after the right password', async () => {
		const person = await makePerson();
		for (let round = 0; round < 3; round++) {
			for (let i = 0; i < 5; i++) await signIn(person.email, 'wrong', new CookieJar(), { address: '10.5.5.5' });
			const jar = new CookieJar();
			await signIn(person.email, PASSWORD, jar, { address: '10.5.5.5' });
			expect(jar.get(COOKIE)).toBeTruthy();
		}
	});

	it.each(['https://elsewhere.example/x', '//elsewhere.example', '/\\elsewhere.example', 'javascript:alert(1)'])(
		'never leads away from this host: %s',
		async (redirectTo) => {
			const person = await makePerson();
			const response = await signIn(person.email, PASSWORD, new CookieJar(), { redirectTo });
			expect(response.headers.get('location')).toBe('/notebook');
		}
	);

	it('refuses a form of another site', async () => {
		const person = await makePerson();
		const jar = new CookieJar();
		expect((await signIn(person.email, PASSWORD, jar, { origin: 'https://elsewhere.example' })).status).toBe(403);
		expect(jar.get(COOKIE)).toBeUndefined();
	});

	it('gives a new session each time and ends the one that the browser had', async () => {
		const person = await makePerson();
		const jar = new CookieJar();
		await signIn(person.email, PASSWORD, jar);
		const before = jar.copy();
		await signIn(person.email, PASSWORD, jar);
		expect(jar.get(COOKIE)).not.toBe(before.get(COOKIE));
		expect((await testRequest('/api/v1/runs', { jar })).status).toBe(200);
		expect((await testRequest('/api/v1/runs', { jar: before })).status).toBe(401);
	});
});

describe('a session', () => {
	it('ends with signing out, for every copy of its cookie', async () => {
		const jar = await signedIn(await makePerson());
		const copy = jar.copy();
		const response = await testRequest('/sign-out', {
			method: 'POST',
			body: 'redirectTo=%2F',
			headers: { 'content-type': 'application/x-www-form-urlencoded' },
			jar
		});
		expect([302, 303]).toContain(response.status);
		expect(jar.get(COOKIE)).toBeUndefined();
		expect((await testRequest('/api/v1/runs', { jar: copy })).status).toBe(401);
		expect(copy.get(COOKIE), 'the refused cookie is cleared').toBeUndefined();
	});

	it.each([
		{ name: 'was revoked', change: { revoked_at: new Date() } },
		{ name: 'ran out', change: { expires_at: new Date(Date.now() - 1000) } },
		{ name: 'was not used for two weeks', change: { last_seen_at: new Date(Date.now() - 15 * 86_400_000) } }
	])('that $name opens nothing', async ({ change }) => {
		const person = await makePerson();
		const jar = await signedIn(person);
		await database()('sign_in_sessions').where({ person_id: person.id }).update(change);
		expect((await testRequest('/api/v1/runs', { jar })).status).toBe(401);
	});

	it('of an account that was closed opens nothing', async () => {
		const person = await makePerson();
		const jar = await signedIn(person);
		await database()('people').where({ id: person.id }).update({ disabled_at: new Date() });
		expect((await testRequest('/api/v1/runs', { jar })).status).toBe(401);
	});

	it('cannot be made up: a cookie that was not signed here is no cookie', async () => {
		const jar = new CookieJar();
		jar.asCookies().set(COOKIE, 'eyJhbGciOiJkaXIiLCJlbmMiOiJBMjU2Q0JDLUhTNTEyIn0..x.x.x');
		expect((await testRequest('/api/v1/runs', { jar })).status).toBe(401);
	});

	it('is stored as a hash alone', async () => {
		const person = await makePerson();
		await signedIn(person);
		const row = await database()('sign_in_sessions').where({ person_id: person.id }).first();
		expect(row.token_hash).toBeInstanceOf(Buffer);
		expect(row.token_hash.length).toBe(32);
	});
});
