import '../helpers/server.ts';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { decodePublicId } from '../../src/lib/server/db/publicId.ts';
import { JobRunner } from '../../src/lib/server/jobs/jobRunner.ts';
import type { MailInput } from '../../src/lib/server/mail/mailKinds.ts';
import { mailSettings } from '../../src/lib/server/mail/mailSettings.ts';
import { queueMail } from '../../src/lib/server/mail/queueMail.ts';
import { openLetter } from '../../src/lib/server/mail/sealing.ts';
import { chooseMail } from '../../src/lib/server/mail/unsubscribe.ts';
import { rawStore } from '../../src/lib/server/storage/store.ts';
import { addGuardian, makePerson } from '../helpers/factories.ts';
import { headersOf, startMailServer, textOf, type TestMailServer } from '../helpers/mailServer.ts';

let server: TestMailServer;

beforeAll(async () => {
	server = await startMailServer();
});
afterAll(async () => {
	await server.close();
	await closeDatabase();
});
beforeEach(() => {
	process.env.KERBNOTE_SMTP_URL = server.url;
	process.env.KERBNOTE_MAIL_FROM = 'Kerbnote <letters@kerbnote.example>';
	server.letters.length = 0;
	server.refuse = null;
});
afterEach(() => {
	delete process.env.KERBNOTE_SMTP_URL;
	delete process.env.KERBNOTE_MAIL_FROM;
});

const RESET_PATH = '/reset/a-token-that-opens-an-account';
const reset = (email: string): MailInput => ({
	kind: 'passwordReset',
	to: { email },
	data: { path: RESET_PATH, validMinutes: 60 }
});
const reply = (personId: number, from = 'Rhea Calloway', words = 'Well done'): MailInput => ({
	kind: 'reply',
	to: { personId },
	data: { from, about: 'your note on corner 4', words, path: '/runs' }
});
let count = 0;
const address = () => `reader.${process.pid}.${count++}@example.org`;

const rowOf = (id: string) =>
	database()('mail_log')
		.where({ public_id: decodePublicId(id) })
		.first();
const jobOf = (mailId: number) => database()('jobs').whereRaw("JSON_VALUE(payload, '$.mailId') = ?", [mailId]).first();

/** Lets a worker send what is due; where a retry waits, its pause is taken away `tries` times. */
async function work(tries = 1): Promise<void> {
	const db = database();
	const runner = new JobRunner({
		db,
		store: rawStore(),
		pool: { run: () => Promise.reject(new Error()) },
		slots: 1,
		pollMs: 5
	});
	await runner.start();
	const due = () =>
		db('jobs')
			.where({ kind: 'sendMail' })
			.whereIn('status', ['waiting', 'running'])
			.where('attempts', '<', tries)
			.first('id');
	while (await due()) {
		await db('jobs')
			.where({ kind: 'sendMail', status: 'waiting' })
			.update({ run_at: db.raw('CURRENT_TIMESTAMP(3)') });
		await new Promise((done) => setTimeout(done, 10));
	}
	await runner.stop(5_000);
}

describe('a letter', () => {
	it('reaches the mail server over SMTP as text and HTML, and is forgotten here once it is sent', async () => {
		const to = address();
		const [id] = await queueMail(database(), reset(to));
		const queued = await rowOf(id);
		expect(queued).toMatchObject({ state: 'queued', to_email: to, is_outbox_only: 0 });
		await work();
		expect(server.letters).toHaveLength(1);
		const [letter] = server.letters;
		expect(letter).toMatchObject({ from: 'letters@kerbnote.example', to: [to] });
		const headers = headersOf(letter);
		expect(headers.get('subject')).toBe('Choose a new password');
		expect(headers.get('from')).toBe('Kerbnote <letters@kerbnote.example>');
		expect(headers.get('message-id')).toBe(`<${id}@localhost>`);
		expect(headers.get('auto-submitted')).toBe('auto-generated');
		expect(headers.get('content-type')).toMatch(/^multipart\/alternative/);
		expect(textOf(letter)).toContain(`http://localhost${RESET_PATH}\r\n`);
		expect(letter.raw).not.toMatch(/<img|src=3D|url\(/i);
		expect(await rowOf(id)).toMatchObject({ state: 'sent', attempts: 1, error: null, sealed: null });
		expect((await rowOf(id)).sent_at).toBeInstanceOf(Date);
	});

	it('leaves no link in the log or the queue for whoever reads the tables', async () => {
		const [id] = await queueMail(database(), reset(address()));
		const row = await rowOf(id);
		expect(JSON.stringify({ ...row, sealed: row.sealed.toString('latin1') })).not.toContain('opens-an-account');
		expect(JSON.stringify(await jobOf(row.id))).not.toContain('opens-an-account');
		expect(openLetter(row.sealed, mailSettings().secret)?.text).toContain(RESET_PATH);
		expect(openLetter(row.sealed, 'another secret, of more than 32 characters')).toBeNull();
		await work();
	});

	it('stands or falls with the transaction that it tells of', async () => {
		const db = database();
		const to = address();
		await db
			.transaction(async (trx) => {
				await queueMail(trx, reset(to));
				throw new Error('what it told of did not happen');
			})
			.catch(() => {});
		expect(await db('mail_log').where({ to_email: to }).first()).toBeUndefined();
	});

	it.each([
		['a line end in a name', 'Rhea\r\nBcc: everybody@example.net\r\n\r\n<p>'],
		['a bare line feed', 'Rhea\nBcc: everybody@example.net'],
		['a Unicode line separator', 'Rhea\u2028Bcc: everybody@example.net'],
		['a null and an escape', 'Rhea\u0000\u001b[2J Bcc: everybody@example.net']
	])('cannot be given another header by %s', async (_case, from) => {
		const reader = await makePerson('Mira Tansley');
		await queueMail(database(), reply(reader.id, from));
		await work();
		expect(server.letters).toHaveLength(1);
		expect(server.letters[0].to).toEqual([reader.email]);
		const headers = headersOf(server.letters[0]);
		expect(headers.has('bcc')).toBe(false);
		expect([...headers.keys()].sort()).toEqual([
			'auto-submitted',
			'content-type',
			'date',
			'from',
			'list-unsubscribe',
			'list-unsubscribe-post',
			'message-id',
			'mime-version',
			'subject',
			'to',
			'x-auto-response-suppress'
		]);
	});

	it.each(['a@example.org\r\nRCPT TO:<b@example.net>', 'a@example.org, b@example.net', 'a b@example.org'])(
		'is not written to what is no single address: %j',
		async (email) => {
			await expect(queueMail(database(), reset(email))).rejects.toThrow(/email/i);
		}
	);

	it('shows markup in words as the signs that somebody typed', async () => {
		const reader = await makePerson('Mira <b>Tansley</b>');
		const [id] = await queueMail(database(), reply(reader.id, 'Rhea', '<script>alert(1)</script>\nand "more"'));
		const { html, text } = openLetter((await rowOf(id)).sealed, mailSettings().secret) ?? { html: '', text: '' };
		expect(html).not.toContain('<script>');
		expect(html).toContain('&lt;script&gt;alert(1)&lt;/script&gt;<br>and &quot;more&quot;');
		expect(html).toContain('Hello Mira &lt;b&gt;Tansley&lt;/b&gt;,');
		expect(text).toContain('> <script>alert(1)</script>\n> and "more"\n(Rhea)');
		await work();
	});
});

describe('a mail server that does not take a letter', () => {
	it('is asked again while it says "later", and the letter goes out in the end', async () => {
		server.refuse = { at: 'data', code: 451, text: 'greylisted, come back' };
		const [id] = await queueMail(database(), reset(address()));
		await work(2);
		expect(await rowOf(id)).toMatchObject({
			state: 'queued',
			attempts: 2,
			error: expect.stringContaining('greylisted')
		});
		server.refuse = null;
		await work(3);
		expect(server.letters).toHaveLength(1);
		expect(await rowOf(id)).toMatchObject({ state: 'sent', attempts: 3, error: null });
	});

	it('waits longer each time, for hours in all', async () => {
		const db = database();
		server.refuse = { at: 'data', code: 451, text: 'later' };
		const [id] = await queueMail(db, reset(address()));
		await work(4);
		const job = await jobOf((await rowOf(id)).id);
		expect(job).toMatchObject({ status: 'waiting', attempts: 4, max_attempts: 9, error_code: 'mail_not_sent' });
		const [[{ pause }]] = await db.raw(
			'SELECT TIMESTAMPDIFF(SECOND, CURRENT_TIMESTAMP(3), run_at) AS pause FROM jobs WHERE id = ?',
			[job.id]
		);
		expect(pause).toBeGreaterThan(50);
		expect(pause).toBeLessThanOrEqual(64);
		await work(9);
		expect(await rowOf(id)).toMatchObject({ state: 'failed', attempts: 9, sealed: null });
		expect(await jobOf((await rowOf(id)).id)).toMatchObject({ status: 'failed' });
	});

	it('has the last word where it says "no such person": a bounce, and no second try', async () => {
		server.refuse = { at: 'recipient', code: 550, text: 'no such person here' };
		const [id] = await queueMail(database(), reset(address()));
		await work(1);
		expect(await rowOf(id)).toMatchObject({ state: 'bounced', attempts: 1, sealed: null });
		expect((await rowOf(id)).error).toContain('no such person here');
		expect(await jobOf((await rowOf(id)).id)).toMatchObject({ status: 'done' });
	});

	it('may be away', async () => {
		process.env.KERBNOTE_SMTP_URL = 'smtp://127.0.0.1:9';
		const [id] = await queueMail(database(), reset(address()));
		await work(1);
		expect(await rowOf(id)).toMatchObject({
			state: 'queued',
			attempts: 1,
			error: expect.stringContaining('ECONNREFUSED')
		});
		process.env.KERBNOTE_SMTP_URL = server.url;
		await work(2);
		expect(await rowOf(id)).toMatchObject({ state: 'sent' });
	});
});

describe('without a mail server', () => {
	it('a letter stays in the outbox, and none waits to be sent by surprise later', async () => {
		delete process.env.KERBNOTE_SMTP_URL;
		const [id] = await queueMail(database(), reset(address()));
		const row = await rowOf(id);
		expect(row).toMatchObject({ state: 'queued', is_outbox_only: 1 });
		expect(row.sealed).not.toBeNull();
		expect(await jobOf(row.id)).toBeUndefined();
	});

	it.each([
		['KERBNOTE_SMTP_URL', 'https://mail.example.org'],
		['KERBNOTE_MAIL_FROM', 'Kerbnote <a@example.org>\nBcc: b@example.org'],
		['KERBNOTE_MAIL_FROM', 'nobody']
	])('a wrong %s is named: %j', (variable, value) => {
		process.env[variable] = value;
		expect(() => mailSettings()).toThrow(variable);
	});
});

describe('who gets letters', () => {
	it('is a minor’s guardian where the minor has no address', async () => {
		const db = database();
		const [minor, guardian] = [await makePerson('Jonas Velde', { isMinor: true }), await makePerson('Anna Velde')];
		await db('people').where({ id: minor.id }).update({ email: null });
		await addGuardian(guardian, minor);
		const [id, ...more] = await queueMail(db, reply(minor.id));
		expect(more).toEqual([]);
		expect(await rowOf(id)).toMatchObject({ to_email: guardian.email, to_person_id: guardian.id });
		await work();
	});

	it('is nobody whose account is closed', async () => {
		const db = database();
		const reader = await makePerson();
		await db('people').where({ id: reader.id }).update({ disabled_at: new Date() });
		expect(await queueMail(db, reply(reader.id))).toEqual([]);
	});

	it('is who asked for a kind that is opt-in, and who did not end one that is not', async () => {
		const db = database();
		const reader = await makePerson();
		const summary: MailInput = {
			kind: 'weeklySummary',
			to: { personId: reader.id },
			data: { from: '2026-11-23T00:00:00Z', lines: ['Mira Tansley: 2 runs'], path: '/notebook' }
		};
		expect(await queueMail(db, summary)).toEqual([]);
		await chooseMail(db, reader.id, 'weeklySummary', true);
		expect(await queueMail(db, summary)).toHaveLength(1);
		expect(await queueMail(db, reply(reader.id))).toHaveLength(1);
		await chooseMail(db, reader.id, 'reply', false);
		expect(await queueMail(db, reply(reader.id))).toEqual([]);
		await work();
	});
});
