import '../helpers/server.ts';
import { afterAll, beforeEach, describe, expect, it } from 'vitest';
import { z } from 'zod';
import { settingsViewSchema } from '../../src/lib/schemas/settings.ts';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import type { CookieJar } from '../helpers/cookieJar.ts';
import { makePerson, signedIn, type TestPerson } from '../helpers/factories.ts';
import { testRequest } from '../helpers/testRequest.ts';

/** A person's own settings through the real `handle`: what they change holds at once, and nobody changes another's. */

let mira: TestPerson;
let jar: CookieJar;

beforeEach(async () => {
	mira = await makePerson('Mira Tansley');
	jar = await signedIn(mira);
});
afterAll(closeDatabase);

async function post(action: string, fields: Record<string, string | string[]>, by = jar): Promise<Response> {
	const body = new URLSearchParams();
	for (const [name, value] of Object.entries(fields)) for (const one of [value].flat()) body.append(name, one);
	return await testRequest(`/settings?/${action}`, {
		method: 'POST',
		body: body.toString(),
		headers: { 'content-type': 'application/x-www-form-urlencoded' },
		jar: by
	});
}

async function settings(by = jar) {
	const response = await testRequest('/settings', { jar: by });
	return z.object({ settings: settingsViewSchema }).parse(await response.json()).settings;
}

const madeSchema = z.object({ token: z.string() });

describe('the profile', () => {
	const profile = { name: 'Mira T.', theme: 'dark', speedUnit: 'mph' };

	it('is written down, and what the form does not hold stays', async () => {
		await database()('people')
			.where({ id: mira.id })
			.update({ preferences: JSON.stringify({ pressureUnit: 'psi' }) });
		expect((await post('profile', profile)).status).toBe(200);
		expect(await settings()).toMatchObject({
			name: 'Mira T.',
			preferences: { theme: 'dark', speedUnit: 'mph', pressureUnit: 'psi', lengthUnit: 'm' }
		});
		expect(jar.get('kerbnote-theme')).toBe('dark');
	});

	it.each([
		{ fields: { ...profile, name: ' ' }, field: 'name' },
		{ fields: { ...profile, theme: 'pink' }, field: 'theme' }
	])('refuses $fields at its field and writes nothing', async ({ fields, field }) => {
		const response = await post('profile', fields);
		expect(response.status).toBe(400);
		expect(JSON.stringify(await response.json())).toContain(`"${field}"`);
		expect((await settings()).name).toBe('Mira Tansley');
	});
});

describe('sign-ins', () => {
	it('are listed with the one that asks, and end one by one', async () => {
		const elsewhere = await signedIn(mira);
		const before = await settings();
		expect(before.signIns).toHaveLength(2);
		const other = before.signIns.find((signIn) => !signIn.isThis);
		expect((await post('endSignIn', { id: other?.id ?? '' })).status).toBe(303);
		expect((await settings()).signIns.map((signIn) => signIn.isThis)).toEqual([true]);
		expect((await testRequest('/settings', { jar: elsewhere })).headers.get('location')).toMatch(/^\/sign-in/);
	});

	it('end all at once but for the one that asks', async () => {
		const elsewhere = [await signedIn(mira), await signedIn(mira)];
		expect((await post('endOthers', {})).status).toBe(303);
		for (const other of elsewhere) expect((await testRequest('/settings', { jar: other })).status).toBe(303);
		expect((await settings()).signIns).toHaveLength(1);
	});

	it('of somebody else are not there', async () => {
		const tomas = await makePerson('Tomas Ruud');
		const [foreign] = (await settings(await signedIn(tomas))).signIns;
		expect((await post('endSignIn', { id: foreign.id })).status).toBe(404);
		expect((await post('endSignIn', { id: 'nonsense' })).status).toBe(404);
		expect((await settings()).signIns.map((signIn) => signIn.id)).not.toContain(foreign.id);
	});
});

describe('tokens', () => {
	const input = { name: 'evening script', scopes: ['laps:read'], days: '30' };
	const asks = (token: string, path = '/api/v1/runs') =>
		testRequest(path, { headers: { authorization: `Bearer ${token}` }, origin: null });

	it('open what they were made for, are shown once, and end when they are revoked', async () => {
		const { token } = madeSchema.parse(await (await post('makeToken', input)).json());
		expect((await asks(token)).status).toBe(200);
		const [listed] = (await settings()).tokens;
		expect(listed).toMatchObject({ name: 'evening script', scopes: ['laps:read'] });
		expect(Date.parse(listed.expiresAt ?? '') - Date.now()).toBeLessThan(31 * 86_400_000);
		expect(await (await testRequest('/settings', { jar })).text()).not.toContain(token);
		expect((await post('revokeToken', { id: listed.id })).status).toBe(303);
		expect((await asks(token)).status).toBe(401);
		expect((await settings()).tokens).toEqual([]);
	});

	it('open nothing else', async () => {
		const { token } = madeSchema.parse(await (await post('makeToken', input)).json());
		const upload = await testRequest('/api/v1/uploads?name=a.csv', {
			method: 'PUT',
			body: new Uint8Array([1]),
			headers: { authorization: `Bearer ${token}` },
			origin: null
		});
		expect(upload.status).toBe(403);
		expect((await asks(token, '/settings')).status).toBe(303);
	});

	it.each([
		{ fields: { ...input, name: '' }, field: 'name' },
		{ fields: { ...input, scopes: [] }, field: 'scopes' },
		{ fields: { ...input, scopes: ['everything'] }, field: 'scopes' },
		{ fields: { ...input, days: '0' }, field: 'days' }
	])('are not made of $fields', async ({ fields, field }) => {
		const response = await post('makeToken', fields);
		expect(response.status).toBe(400);
		expect(JSON.stringify(await response.json())).toContain(`"${field}"`);
		expect((await settings()).tokens).toEqual([]);
	});

	it('are limited in number, in words', async () => {
		for (let made = 0; made < 20; made++) expect((await post('makeToken', input)).status).toBe(200);
		const response = await post('makeToken', input);
		expect(response.status).toBe(409);
		expect(await response.text()).toContain('at most 20 tokens');
	});

	it('of somebody else are not there', async () => {
		const tomas = await makePerson('Tomas Ruud');
		const theirs = await signedIn(tomas);
		await post('makeToken', input, theirs);
		const [foreign] = (await settings(theirs)).tokens;
		expect((await post('revokeToken', { id: foreign.id })).status).toBe(404);
		expect((await settings(theirs)).tokens).toHaveLength(1);
	});
});
