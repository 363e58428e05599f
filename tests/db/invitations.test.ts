import '../helpers/server.ts';
import { rm } from 'node:fs/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { environment } from '../../src/lib/server/environment.ts';
import { mailSettings } from '../../src/lib/server/mail/mailSettings.ts';
import { openLetter } from '../../src/lib/server/mail/sealing.ts';
import { sweepGuardianRequests } from '../../src/lib/server/services/invitations/guardianRequests.ts';
import { CookieJar } from '../helpers/cookieJar.ts';
import {
	addGuardian,
	addMember,
	makeOrganisation,
	makePerson,
	signedIn,
	type TestPerson
} from '../helpers/factories.ts';
import { storedRun, type StoredRun } from '../helpers/storedRun.ts';
import { testRequest } from '../helpers/testRequest.ts';

let rhea: TestPerson;
let coach: CookieJar;

beforeAll(async () => {
	rhea = await makePerson('Rhea Calloway');
	coach = await signedIn(rhea);
});
afterAll(async () => {
	await closeDatabase();
	await rm(environment().KERBNOTE_STORAGE, { recursive: true, force: true });
});

let count = 0;
const newAddress = () => `newcomer.${process.pid}.${count++}@example.org`;
const PASSWORD = 'a pear, a pear, a pear';

function post(path: string, fields: Record<string, string>, jar = new CookieJar()): Promise<Response> {
	return testRequest(path, {
		method: 'POST',
		jar,
		// Each from a place of its own: accounts made from one place are counted.
		address: `192.0.2.${count++ % 250}`,
		body: new URLSearchParams(fields).toString(),
		headers: { 'content-type': 'application/x-www-form-urlencoded', accept: 'text/html' }
	});
}
const json = async (path: string, jar: CookieJar) => await (await testRequest(path, { jar })).json();

/** Path of the link in the newest letter to somebody. */
async function linkTo(email: string): Promise<string> {
	const row = await database()('mail_log').where({ to_email: email }).orderBy('id', 'desc').first('sealed');
	const text = row ? openLetter(row.sealed, mailSettings().secret)?.text : '';
	return /http:\/\/localhost(\/join\/\S+)/.exec(text ?? '')?.[1] ?? '';
}

/** Rhea asks somebody in; the link out of the letter. */
async function invited(email: string, fields: Record<string, string> = {}, jar = coach): Promise<string> {
	const answer = await post('/drivers?/invite', { email, as: 'coach', asksFor: 'all', note: '', ...fields }, jar);
	expect(answer.status, await answer.clone().text()).toBe(200);
	return await linkTo(email);
}

const joining = (email: string, more: Record<string, string> = {}) => ({
	email,
	name: 'Mira Tansley',
	password: PASSWORD,
	age: 'adult',
	sees: 'all',
	providerId: 'credentials',
	redirectTo: '/drivers',
	...more
});

describe('a coach who invites a newcomer', () => {
	it('sees the runs that the newcomer lets them see, until it is taken back', async () => {
		const email = newAddress();
		const link = await invited(email, { note: 'See you on Friday' });
		expect(await json(link, new CookieJar())).toMatchObject({
			invitation: {
				email,
				inviter: 'Rhea Calloway',
				asksFor: 'all your runs',
				note: 'See you on Friday',
				hasAccount: false
			}
		});
		const mira = new CookieJar();
		const joined = await post(`${link}?/join`, joining(email), mira);
		expect([joined.status, joined.headers.get('location')]).toEqual([302, '/drivers']);

		const person = await database()('people').where({ email }).first();
		expect(person).toMatchObject({ name: 'Mira Tansley', is_minor: 0, disabled_at: null });
		const run = await storedRun({ id: person.id, publicId: '', email, name: person.name });
		const { view } = await json('/drivers', coach);
		const row = view.roster.find(({ lastRun }: { lastRun: { id: string } | null }) => lastRun?.id === run.runPublicId);
		expect(row).toMatchObject({ driver: { name: 'Mira Tansley' }, grants: ['all runs'], runs: 1 });
		const paths = [
			`/runs/${run.runPublicId}`,
			`/drivers/${row.driver.id}`,
			`/api/v1/laps/${run.lapPublicIds[0]}/trace?channels=speedKmh`
		];
		for (const path of paths) expect((await testRequest(path, { jar: coach })).status, path).toBe(200);

		const given = (await json('/drivers', mira)).view.given;
		expect(given).toMatchObject([{ grantee: 'Rhea Calloway', what: 'all runs' }]);
		expect((await post('/drivers?/revoke', { id: given[0].id }, coach)).status).toBe(404);
		expect((await post('/drivers?/revoke', { id: given[0].id }, mira)).status).toBe(303);
		for (const path of paths) expect((await testRequest(path, { jar: coach })).status, path).toBe(404);
		const actions = await database()('audit_log').where({ actor_id: person.id }).orderBy('id').pluck('action');
		expect(actions).toEqual(
			expect.arrayContaining(['person_created', 'grant_given', 'invitation_accepted', 'grant_revoked'])
		);
	});

	it('finds a link good once, and keeps nobody in who is refused', async () => {
		const email = newAddress();
		const link = await invited(email);
		expect((await post(`${link}?/join`, joining(email, { password: 'short' }))).status).toBe(400);
		expect((await post(`${link}?/join`, joining(email))).status).toBe(302);
		expect((await post(`${link}?/join`, joining(email))).status).toBe(409);
		expect(await json(link, new CookieJar())).toMatchObject({ invitation: null, request: null });
		expect(await database()('people').where({ email })).toHaveLength(1);
	});

	it('sends it again under a new link, withdraws it, and is told of a no', async () => {
		const email = newAddress();
		const first = await invited(email);
		expect((await post('/drivers?/invite', { email, as: 'coach', asksFor: 'all', note: '' }, coach)).status).toBe(400);
		const of = async () =>
			(await json('/drivers', coach)).view.invitations.find((one: { email: string }) => one.email === email);
		const { id } = await of();
		expect((await post('/drivers?/again', { id }, coach)).status).toBe(303);
		const second = await linkTo(email);
		expect(await json(first, new CookieJar())).toMatchObject({ invitation: null });
		expect(await json(second, new CookieJar())).toMatchObject({ invitation: { email } });
		expect((await post('/drivers?/withdraw', { id }, await signedIn(await makePerson()))).status).toBe(404);
		expect((await post('/drivers?/withdraw', { id }, coach)).status).toBe(303);
		expect(await json(second, new CookieJar())).toMatchObject({ invitation: null });
		expect(await of()).toBeUndefined();
		const third = await invited(email);
		expect((await post(`${third}?/decline`, {})).status).toBe(200);
		expect(await of()).toMatchObject({ state: 'declined' });
		expect((await post(`${third}?/join`, joining(email))).status).toBe(409);
	});

	it('cannot use a link whose two weeks are over', async () => {
		const email = newAddress();
		const link = await invited(email);
		const db = database();
		await db('invitations')
			.where({ email })
			.update({ expires_at: db.raw('CURRENT_TIMESTAMP(3) - INTERVAL 1 SECOND') });
		expect((await post(`${link}?/join`, joining(email))).status).toBe(409);
	});
});

describe('somebody with an account', () => {
	let jonas: TestPerson;
	let jar: CookieJar;
	let run: StoredRun;
	let other: StoredRun;
	beforeAll(async () => {
		jonas = await makePerson('Jonas Velde');
		jar = await signedIn(jonas);
		run = await storedRun(jonas);
		other = await storedRun(jonas);
	});
	const clear = () => database()('grants').where({ owner_id: jonas.id }).delete();

	it.each([
		['one run', () => `run:${run.runPublicId}`, [200, 404]],
		['nothing yet', () => 'none', [404, 404]],
		['all runs', () => 'all', [200, 200]]
	])('lets a coach see %s, and no more', async (_case, sees, statuses) => {
		const link = await invited(jonas.email);
		expect((await post(`${link}?/accept`, { sees: sees() }, jar)).status).toBe(303);
		const seen = await Promise.all(
			[run, other].map(async ({ runPublicId }) => (await testRequest(`/runs/${runPublicId}`, { jar: coach })).status)
		);
		expect(seen).toEqual(statuses);
		await clear();
	});

	it('cannot share what is not theirs', async () => {
		const foreign = await storedRun(await makePerson('Tomas Ruud'));
		const link = await invited(jonas.email);
		expect((await post(`${link}?/accept`, { sees: `run:${foreign.runPublicId}` }, jar)).status).toBe(400);
		expect((await post(`${link}?/accept`, { sees: 'all', of: rhea.publicId }, jar)).status).toBe(400);
		expect((await testRequest(`/runs/${foreign.runPublicId}`, { jar: coach })).status).toBe(404);
		expect((await post(`${link}?/decline`, {}, jar)).status).toBe(200);
	});

	it('is asked to sign in first', async () => {
		const link = await invited(jonas.email);
		expect(await json(link, new CookieJar())).toMatchObject({ invitation: { hasAccount: true } });
		const away = await post(`${link}?/accept`, { sees: 'all' });
		expect(away.headers.get('location')).toBe(`/sign-in?redirectTo=${encodeURIComponent(link)}`);
		expect((await post(`${link}?/join`, joining(jonas.email))).status).toBe(400);
		expect((await post(`${link}?/decline`, {}, jar)).status).toBe(200);
	});

	it('accepts no invitation of their own', async () => {
		const link = await invited(newAddress());
		expect((await post(`${link}?/accept`, { sees: 'all' }, coach)).status).toBe(400);
	});
});

describe('somebody under 18', () => {
	it('gets an account that opens, and shares, only when the guardian agrees', async () => {
		const db = database();
		const [email, guardianEmail] = [newAddress(), newAddress()];
		const link = await invited(email);
		expect((await post(`${link}?/join`, joining(email, { age: 'under', guardianEmail: '' }))).status).toBe(400);
		expect((await post(`${link}?/join`, joining(email, { age: 'under', guardianEmail: email }))).status).toBe(400);
		expect((await post(`${link}?/join`, joining(email, { age: 'under', guardianEmail }))).status).toBe(200);
		const minor = await db('people').where({ email }).first();
		expect(minor).toMatchObject({ is_minor: 1 });
		expect(minor.disabled_at).not.toBeNull();
		const signIn = () => post('/sign-in', { email, password: PASSWORD, providerId: 'credentials' });
		expect((await signIn()).status).toBe(401);
		expect(await db('grants').where({ owner_id: minor.id })).toEqual([]);

		const guardianLink = await linkTo(guardianEmail);
		expect(await json(guardianLink, new CookieJar())).toMatchObject({
			request: { minor: 'Mira Tansley', inviter: 'Rhea Calloway', shares: 'all their runs', hasAccount: false }
		});
		const guardian = new CookieJar();
		const fields = {
			email: guardianEmail,
			name: 'Anna Tansley',
			password: PASSWORD,
			providerId: 'credentials',
			redirectTo: '/drivers'
		};
		expect((await post(`${guardianLink}?/guard`, fields, guardian)).status).toBe(400);
		expect((await post(`${guardianLink}?/guard`, { ...fields, adult: 'yes' }, guardian)).status).toBe(302);
		expect((await signIn()).status).toBe(302);
		const run = await storedRun({ id: minor.id, publicId: '', email, name: minor.name });
		for (const jar of [guardian, coach]) {
			expect((await testRequest(`/runs/${run.runPublicId}`, { jar })).status).toBe(200);
		}
		const [grant] = (await json('/drivers', guardian)).view.given;
		expect(grant).toMatchObject({ owner: { name: 'Mira Tansley' }, what: 'all runs' });
		expect((await post('/drivers?/revoke', { id: grant.id }, guardian)).status).toBe(303);
		expect((await testRequest(`/runs/${run.runPublicId}`, { jar: coach })).status).toBe(404);
		expect((await post(`${guardianLink}?/agree`, {}, guardian)).status).toBe(409);
	});

	it.each([
		['says no', async (link: string) => void (await post(`${link}?/refuse`, {}))],
		[
			'does not answer',
			async () => {
				const db = database();
				await db('guardian_requests')
					.whereNull('answered_at')
					.update({ expires_at: db.raw('CURRENT_TIMESTAMP(3) - INTERVAL 1 SECOND') });
				await sweepGuardianRequests(db);
			}
		]
	])('leaves nothing behind when the guardian %s', async (_case, answer) => {
		const [email, guardianEmail] = [newAddress(), newAddress()];
		const link = await invited(email);
		expect((await post(`${link}?/join`, joining(email, { age: 'under', guardianEmail }))).status).toBe(200);
		await answer(await linkTo(guardianEmail));
		expect(await database()('people').where({ email })).toEqual([]);
	});

	it('coaches nobody, and invites nobody', async () => {
		const team = await makeOrganisation();
		const admin = await makePerson('Ilse Garrow');
		await addMember(team, admin, 'admin');
		const jar = await signedIn(admin);
		const [{ value }] = (await json('/drivers', jar)).view.roles.filter(({ value }: { value: string }) =>
			value.endsWith(':coach')
		);
		const email = newAddress();
		const link = await invited(email, { as: value, asksFor: 'none' }, jar);
		const guardianEmail = newAddress();
		expect((await post(`${link}?/join`, joining(email, { age: 'under', guardianEmail }))).status).toBe(400);
		const minor = await makePerson('Jonas Velde', { isMinor: true });
		await addGuardian(admin, minor);
		const invite = { email: newAddress(), as: 'coach', asksFor: 'all', note: '' };
		expect((await post('/drivers?/invite', invite, await signedIn(minor))).status).toBe(400);
	});
});

describe('an organisation', () => {
	it('is joined in the role that was given, and its coaches see what is shared with it', async () => {
		const team = await makeOrganisation();
		const [manager, teamCoach] = [await makePerson('Ilse Garrow'), await makePerson('Rhea Calloway')];
		await addMember(team, manager, 'manager');
		await addMember(team, teamCoach, 'coach');
		const jar = await signedIn(manager);
		const { roles } = (await json('/drivers', jar)).view;
		expect(roles.map(({ value }: { value: string }) => value.split(':')[1])).toEqual(['driver', 'coach']);
		const [driver] = roles;
		const tomas = await makePerson('Tomas Ruud');
		const run = await storedRun(tomas);
		const link = await invited(tomas.email, { as: driver.value }, jar);
		expect((await post(`${link}?/accept`, { sees: 'all' }, await signedIn(tomas))).status).toBe(303);
		const memberships = await database()('memberships').where({ person_id: tomas.id });
		expect(memberships).toMatchObject([{ organisation_id: team, role: 'driver', ended_at: null }]);
		expect((await testRequest(`/runs/${run.runPublicId}`, { jar: await signedIn(teamCoach) })).status).toBe(200);
	});

	it.each(['admin', 'manager'])('lets a manager make nobody %s', async (role) => {
		const team = await makeOrganisation();
		const manager = await makePerson('Ilse Garrow');
		await addMember(team, manager, 'manager');
		const jar = await signedIn(manager);
		const [{ value }] = (await json('/drivers', jar)).view.roles;
		const as = `${value.split(':')[0]}:${role}`;
		expect((await post('/drivers?/invite', { email: newAddress(), as, asksFor: 'none', note: '' }, jar)).status).toBe(
			400
		);
		expect((await post('/drivers?/invite', { email: newAddress(), as, asksFor: 'none', note: '' }, coach)).status).toBe(
			400
		);
	});
});

describe('an intake', () => {
	it('is kept in versions, read by whom the driver admits, and written by the driver alone', async () => {
		const db = database();
		const mira = await makePerson();
		const own = await signedIn(mira);
		const path = `/drivers/${mira.publicId}`;
		const answers = {
			goals: 'A clean season',
			drivingLine: 'always',
			brakeCurve: 'bent',
			place: 'simulator',
			sampleRateHz: '20'
		};
		expect((await post(`${path}/intake`, { ...answers, version: '0' }, own)).status).toBe(303);
		expect((await post(`${path}/intake`, { ...answers, goals: 'A podium', version: '1' }, own)).status).toBe(303);
		// Another window, which still shows the first version.
		expect((await post(`${path}/intake`, { ...answers, goals: 'Lost?', version: '1' }, own)).status).toBe(409);
		expect((await post(`${path}/intake`, { ...answers, sampleRateHz: 'many', version: '2' }, own)).status).toBe(400);
		expect((await testRequest(path, { jar: coach })).status).toBe(404);
		const link = await invited(mira.email);
		await post(`${link}?/accept`, { sees: 'all' }, own);
		const { view } = await json(path, coach);
		expect(view.intakes).toMatchObject([
			{ version: 2, answers: { goals: 'A podium', sampleRateHz: 20, aids: [] }, savedBy: 'Mira Tansley' },
			{ version: 1, answers: { goals: 'A clean season' } }
		]);
		expect(view.isKept).toBe(false);
		expect((await testRequest(`${path}/intake`, { jar: coach })).status).toBe(404);
		expect((await post(`${path}/intake`, { ...answers, version: '2' }, coach)).status).toBe(404);
		await db('grants').where({ owner_id: mira.id }).update({ revoked_at: new Date() });
		expect((await testRequest(path, { jar: coach })).status).toBe(404);
	});
});
