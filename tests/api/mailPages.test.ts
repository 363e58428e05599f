import '../helpers/server.ts';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { hashToken } from '../../src/lib/server/auth/sessions.ts';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { decodePublicId } from '../../src/lib/server/db/publicId.ts';
import { JobRunner } from '../../src/lib/server/jobs/jobRunner.ts';
import { mailSettings } from '../../src/lib/server/mail/mailSettings.ts';
import { queueMail } from '../../src/lib/server/mail/queueMail.ts';
import { openLetter } from '../../src/lib/server/mail/sealing.ts';
import { unsubscribeToken, wants } from '../../src/lib/server/mail/unsubscribe.ts';
import { rawStore } from '../../src/lib/server/storage/store.ts';
import { CookieJar } from '../helpers/cookieJar.ts';
import { makePerson, PASSWORD, signedIn, type TestPerson } from '../helpers/factories.ts';
import { testRequest, type RequestOptions } from '../helpers/testRequest.ts';

afterAll(closeDatabase);

const form = (fields: Record<string, string>, more: RequestOptions = {}): RequestOptions => ({
	method: 'POST',
	body: new URLSearchParams(fields).toString(),
	...more,
	headers: { 'content-type': 'application/x-www-form-urlencoded', ...more.headers }
});

/** Lets a worker write and send what waits. */
async function work(): Promise<void> {
	const db = database();
	const pool = { run: () => Promise.reject(new Error('nothing is imported here')) };
	const runner = new JobRunner({ db, store: rawStore(), pool, slots: 1, pollMs: 5 });
	await runner.start();
	const open = () => db('jobs').where({ kind: 'writeReset' }).whereIn('status', ['waiting', 'running']).first('id');
	while (await open()) await new Promise((done) => setTimeout(done, 10));
	await runner.stop(5_000);
}

/** Path of the link in the newest letter to somebody. */
async function linkTo(email: string): Promise<string> {
	const row = await database()('mail_log').where({ to_email: email }).orderBy('id', 'desc').first('sealed');
	const text = openLetter(row.sealed, mailSettings().secret)?.text ?? '';
	return /http:\/\/localhost(\/\S+)/.exec(text)?.[1] ?? '';
}

describe('a new password by letter', () => {
	let mira: TestPerson;
	beforeAll(async () => {
		mira = await makePerson();
	});
	const ask = (email: string, address = '192.0.2.1') => testRequest('/reset', form({ email }, { address }));
	const signIn = (password: string) =>
		testRequest('/sign-in', form({ email: mira.email, password, providerId: 'credentials' }, { jar: new CookieJar() }));

	it('is answered the same for an address that nobody has, which gets no letter', async () => {
		const unknown = `nobody.${process.pid}@example.org`;
		const [known, other] = [await ask(mira.email), await ask(unknown)];
		expect([known.status, other.status]).toEqual([200, 200]);
		const said = async (response: Response, email: string) => (await response.text()).replaceAll(email, 'EMAIL');
		expect(await said(known, mira.email)).toBe(await said(other, unknown));
		await work();
		expect(await database()('mail_log').where({ to_email: mira.email })).toHaveLength(1);
		expect(await database()('mail_log').where({ to_email: unknown })).toEqual([]);
	});

	it('is set by the link, once, and ends every sign-in and every other link', async () => {
		await ask(mira.email);
		await work();
		const first = await linkTo(mira.email);
		await ask(mira.email);
		await work();
		const second = await linkTo(mira.email);
		expect(second).not.toBe(first);
		const jar = await signedIn(mira);
		expect((await testRequest('/notebook', { jar })).status).toBe(200);
		const done = await testRequest(second, form({ password: 'a pear, a pear, a pear' }));
		expect([done.status, done.headers.get('location')]).toEqual([303, '/sign-in?password=new']);
		expect((await testRequest('/notebook', { jar })).status).toBe(303);
		expect((await signIn(PASSWORD)).status).toBe(401);
		expect((await signIn('a pear, a pear, a pear')).status).toBe(302);
		for (const link of [first, second]) {
			expect(await (await testRequest(link)).json()).toMatchObject({ holds: false });
			expect((await testRequest(link, form({ password: 'another one entirely' }))).status).toBe(410);
		}
		expect((await signIn('another one entirely')).status).toBe(401);
	});

	it('holds for an hour, and is stored only as a hash', async () => {
		const db = database();
		const reader = await makePerson();
		await ask(reader.email, '192.0.2.2');
		await work();
		const link = await linkTo(reader.email);
		const row = await db('password_resets')
			.where({ token_hash: hashToken(link.slice('/reset/'.length)) })
			.first();
		const minutes = (row.expires_at.getTime() - row.created_at.getTime()) / 60_000;
		expect(minutes).toBeCloseTo(60, 1);
		await db('password_resets')
			.where({ id: row.id })
			.update({ expires_at: db.raw('CURRENT_TIMESTAMP(3) - INTERVAL 1 SECOND') });
		expect((await testRequest(link, form({ password: 'a pear, a pear, a pear' }))).status).toBe(410);
	});

	it.each([
		['too short', 'short'],
		['one letter held down', 'aaaaaaaaaaaa']
	])('is refused when it is %s, and the link stays good', async (_case, password) => {
		const reader = await makePerson();
		await ask(reader.email, '192.0.2.3');
		await work();
		const link = await linkTo(reader.email);
		expect((await testRequest(link, form({ password }))).status).toBe(400);
		expect(await (await testRequest(link)).json()).toMatchObject({ holds: true });
	});

	it('cannot be asked for without end', async () => {
		const reader = await makePerson();
		const statuses: number[] = [];
		for (let i = 0; i < 6; i++) statuses.push((await ask(reader.email, `198.51.100.${i}`)).status);
		expect(statuses).toEqual([200, 200, 200, 200, 200, 429]);
	});

	it('opens no closed account', async () => {
		const reader = await makePerson();
		await ask(reader.email, '192.0.2.4');
		await work();
		const link = await linkTo(reader.email);
		await database()('people').where({ id: reader.id }).update({ disabled_at: new Date() });
		expect((await testRequest(link, form({ password: 'a pear, a pear, a pear' }))).status).toBe(410);
	});
});

describe('unsubscribing', () => {
	async function tokenOf(person: TestPerson) {
		const publicId = decodePublicId(person.publicId) ?? Buffer.alloc(0);
		return unsubscribeToken(publicId, 'reply');
	}

	it('is one click of a mail program, without cookie and from anywhere (RFC 8058)', async () => {
		const reader = await makePerson();
		expect(await wants(database(), reader.id, 'reply')).toBe(true);
		const response = await testRequest(
			`/unsubscribe/${await tokenOf(reader)}`,
			form({ 'List-Unsubscribe': 'One-Click' }, { origin: null })
		);
		expect(response.status).toBe(200);
		expect(await wants(database(), reader.id, 'reply')).toBe(false);
		expect(await wants(database(), reader.id, 'debriefSent')).toBe(true);
	});

	it('does nothing by looking at the page, which scanners of links do', async () => {
		const reader = await makePerson();
		const response = await testRequest(`/unsubscribe/${await tokenOf(reader)}`);
		expect(await response.json()).toMatchObject({ kind: 'reply', isWanted: true });
		expect(await wants(database(), reader.id, 'reply')).toBe(true);
	});

	it.each([
		['another person', (token: string, other: string) => token.replace(/^[^.]+/, other)],
		['another kind', (token: string) => token.replace('.reply.', '.debriefSent.')],
		['no signature', (token: string) => token.replace(/\.[^.]+$/, '.')],
		['more behind it', (token: string) => `${token}.x`]
	])('knows no token with %s', async (_case, change) => {
		const [reader, other] = [await makePerson(), await makePerson()];
		const token = change(await tokenOf(reader), other.publicId);
		expect((await testRequest(`/unsubscribe/${token}`)).status).toBe(404);
		expect((await testRequest(`/unsubscribe/${token}`, form({}, { origin: null }))).status).toBe(404);
		expect(await wants(database(), other.id, 'reply')).toBe(true);
	});

	it('is the only change that another site may ask for', async () => {
		for (const path of ['/reset', '/sign-in', '/settings?/endOthers']) {
			expect((await testRequest(path, form({}, { origin: 'https://other.example' }))).status, path).toBe(403);
			expect((await testRequest(path, form({}, { origin: null }))).status, path).toBe(403);
		}
	});
});

describe('the outbox', () => {
	it('is read by who runs the site, and by nobody else', async () => {
		const db = database();
		const [reader, operator] = [await makePerson(), await makePerson('Otto Operator')];
		await db('site_operators').insert({ person_id: operator.id });
		const [id] = await queueMail(db, {
			kind: 'passwordReset',
			to: { personId: reader.id },
			data: { path: '/reset/x', validMinutes: 60 }
		});
		const asOperator = { jar: await signedIn(operator) };
		expect(await (await testRequest('/admin/outbox', asOperator)).text()).toContain(reader.email);
		expect(await (await testRequest(`/admin/outbox/${id}`, asOperator)).text()).toContain('/reset/x');
		const asReader = { jar: await signedIn(reader) };
		expect((await testRequest('/admin/outbox', asReader)).status).toBe(404);
		expect((await testRequest(`/admin/outbox/${id}`, asReader)).status).toBe(404);
	});

	it('is gone where a mail server is set', async () => {
		const operator = await makePerson('Otto Operator');
		await database()('site_operators').insert({ person_id: operator.id });
		process.env.KERBNOTE_SMTP_URL = 'smtp://127.0.0.1:25';
		try {
			expect((await testRequest('/admin/outbox', { jar: await signedIn(operator) })).status).toBe(404);
		} finally {
			delete process.env.KERBNOTE_SMTP_URL;
		}
	});
});
