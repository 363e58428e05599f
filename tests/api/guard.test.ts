import '../helpers/server.ts';
import { afterAll, describe, expect, it } from 'vitest';
import { problemSchema } from '../../src/lib/schemas/api.ts';
import { closeDatabase } from '../../src/lib/server/db/database.ts';
import { bearer, makePerson, signedIn } from '../helpers/factories.ts';
import { testRequest } from '../helpers/testRequest.ts';

afterAll(closeDatabase);

const RUN = `/api/v1/runs/${'0'.repeat(26)}`;

describe('every answer', () => {
	it('says what a browser may do with it', async () => {
		const { headers } = await testRequest('/sign-in');
		expect(Object.fromEntries(headers)).toMatchObject({
			'x-content-type-options': 'nosniff',
			'x-frame-options': 'DENY',
			'referrer-policy': 'same-origin',
			'cache-control': 'private, no-store'
		});
	});

	it('of the API that is no success is a problem with a code', async () => {
		const jar = await signedIn(await makePerson());
		const answers = await Promise.all([
			testRequest(RUN),
			testRequest(RUN, { jar }),
			testRequest('/api/v1/nothing/here', { jar }),
			testRequest('/api/v1/runs', { method: 'DELETE', jar }),
			testRequest('/api/v1/runs?limit=many', { jar }),
			testRequest(RUN, { method: 'PATCH', jar, body: 'not json' }),
			testRequest(RUN, { method: 'PATCH', jar, body: '{"fuelKg":"much"}' }),
			testRequest(RUN, { method: 'PATCH', jar, body: '{}', origin: 'https://elsewhere.example' })
		]);
		const problems = await Promise.all(answers.map(async (answer) => problemSchema.parse(await answer.json())));
		expect(problems.map(({ status, code }) => `${status} ${code}`)).toEqual([
			'401 sign_in_required',
			'404 not_found',
			'404 not_found',
			'405 method_not_allowed',
			'400 invalid_input',
			'400 invalid_input',
			'400 invalid_input',
			'403 foreign_origin'
		]);
		expect(answers.map(({ headers }) => headers.get('content-type'))).toEqual(
			answers.map(() => 'application/problem+json')
		);
		expect(problems[4].issues).toHaveProperty('limit');
		expect(problems[6].issues).toHaveProperty('fuelKg');
	});
});

describe('a body', () => {
	it('must say how long it is', async () => {
		const jar = await signedIn(await makePerson());
		const body = new ReadableStream({ start: (controller) => controller.close() });
		expect((await testRequest(RUN, { method: 'PATCH', jar, body })).status).toBe(411);
	});

	it('is refused by its stated length, before it is read', async () => {
		const jar = await signedIn(await makePerson());
		const response = await testRequest(RUN, {
			method: 'PATCH',
			jar,
			body: '{}',
			headers: { 'content-length': '99999999' }
		});
		expect(response.status).toBe(413);
		expect(await response.json()).toMatchObject({ code: 'body_too_large' });
	});
});

describe('a token', () => {
	it('needs no origin, opens the API within its scopes, and no page', async () => {
		const person = await makePerson();
		const headers = await bearer(person, ['laps:read']);
		expect((await testRequest('/api/v1/runs', { headers })).status).toBe(200);
		expect((await testRequest(RUN, { method: 'DELETE', headers, origin: null })).status).toBe(403);
		expect((await testRequest('/notebook', { headers })).status).toBe(303);
	});

	it('that is wrong opens nothing, also beside a cookie that would', async () => {
		const jar = await signedIn(await makePerson());
		const headers = { authorization: 'Bearer kn_made_up' };
		expect((await testRequest('/api/v1/runs', { headers, jar })).status).toBe(401);
	});
});

describe('health', () => {
	it('is live and ready when the database has every step', async () => {
		expect(await (await testRequest('/health/live')).text()).toBe('ok');
		expect((await testRequest('/health/ready')).status).toBe(200);
	});
});

describe('a page of the app', () => {
	it('leads to the sign-in and back', async () => {
		const response = await testRequest('/runs?after=abc');
		expect(response.status).toBe(303);
		expect(response.headers.get('location')).toBe('/sign-in?redirectTo=%2Fruns%3Fafter%3Dabc');
	});
});
