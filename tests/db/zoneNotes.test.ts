import '../helpers/server.ts';
import { rm } from 'node:fs/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { ZoneNoteDetail } from '../../src/lib/schemas/zoneNote.ts';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { environment } from '../../src/lib/server/environment.ts';
import { CookieJar } from '../helpers/cookieJar.ts';
import {
	addGuardian,
	addMember,
	makeGrant,
	makeOrganisation,
	makePerson,
	signedIn,
	type TestPerson
} from '../helpers/factories.ts';
import { storedRun, type StoredRun } from '../helpers/storedRun.ts';
import { testRequest } from '../helpers/testRequest.ts';

let mira: TestPerson;
let rhea: TestPerson;
let run: StoredRun;
let driver: CookieJar;
let coach: CookieJar;

const json = (jar: CookieJar, method: string, body?: unknown) => ({
	jar,
	method,
	...(body !== undefined && { body: JSON.stringify(body), headers: { 'content-type': 'application/json' } })
});
const ask = async (jar: CookieJar, method: string, path: string, body?: unknown) =>
	await testRequest(`/api/v1/notes${path}`, json(jar, method, body));
const content = (more: Record<string, unknown> = {}) => ({
	corner: run.cornerPublicId,
	startM: 405,
	endM: 440,
	body: 'Firm, then let it go *slowly*.',
	target: null,
	...more
});
async function write(jar: CookieJar, more: Record<string, unknown> = {}): Promise<ZoneNoteDetail> {
	const response = await ask(jar, 'POST', '', {
		layout: run.layoutPublicId,
		driver: mira.publicId,
		...content(),
		...more
	});
	expect(response.status, await response.clone().text()).toBe(201);
	return await response.json();
}
const listed = async (jar: CookieJar): Promise<string[]> => {
	const response = await ask(jar, 'GET', `?layout=${run.layoutPublicId}`);
	if (response.status !== 200) return [];
	return (await response.json()).notes.map(({ id }: { id: string }) => id);
};

beforeAll(async () => {
	mira = await makePerson();
	rhea = await makePerson('Rhea Calloway');
	run = await storedRun(mira);
	await makeGrant(mira, { to: rhea });
	[driver, coach] = [await signedIn(mira), await signedIn(rhea)];
}, 120_000);

afterAll(async () => {
	await closeDatabase();
	await rm(environment().KERBNOTE_STORAGE, { recursive: true, force: true });
});

describe('a zone note', () => {
	it('is read by the driver as the coach wrote it, with its target', async () => {
		const target = {
			kind: 'peak_brake',
			least: null,
			most: 75,
			base: 'value',
			scope: { dryOnly: false, afterLap: null, holdsOver: null },
			notSlower: true,
			text: ''
		};
		const { id } = await write(coach, { target });
		const note: ZoneNoteDetail = await (await ask(driver, 'GET', `/${id}`)).json();
		expect(note).toMatchObject({
			...content({ target }),
			author: { name: 'Rhea Calloway' },
			cornerNumber: 1,
			mayEdit: false
		});
		expect(await listed(driver)).toContain(id);
	});

	it('keeps what it said before each change', async () => {
		const note = await write(coach);
		const changed = await ask(coach, 'PATCH', `/${note.id}`, content({ body: 'Wait.', revision: note.revision }));
		expect(changed.status).toBe(200);
		const now: ZoneNoteDetail = await changed.json();
		expect(now.body).toBe('Wait.');
		expect(now.revision).toBe(2);
		expect(now.history).toMatchObject([
			{ revision: 1, body: 'Firm, then let it go *slowly*.', changedBy: 'Rhea Calloway' }
		]);
	});

	it('tells the later of two writers, with both texts, and overwrites nothing', async () => {
		const note = await write(coach);
		const first = content({ body: 'from the first window', revision: 1 });
		const second = content({ body: 'from the second window', revision: 1 });
		const answers = await Promise.all([
			ask(coach, 'PATCH', `/${note.id}`, first),
			ask(coach, 'PATCH', `/${note.id}`, second)
		]);
		expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
		const refused = answers.find(({ status }) => status === 409);
		const problem = await refused?.json();
		const now: ZoneNoteDetail = await (await ask(coach, 'GET', `/${note.id}`)).json();
		expect(problem).toMatchObject({ code: 'conflict', conflict: { revision: 2, theirs: { body: now.body } } });
		expect(problem.conflict.yours.body).not.toBe(now.body);
		expect(refused?.headers.get('content-type')).toBe('application/problem+json');
	});

	it('comes back after it was deleted', async () => {
		const { id } = await write(coach);
		expect((await ask(coach, 'DELETE', `/${id}`)).status).toBe(204);
		expect((await ask(driver, 'GET', `/${id}`)).status).toBe(404);
		expect((await ask(coach, 'POST', `/${id}/restore`)).status).toBe(200);
		expect((await ask(driver, 'GET', `/${id}`)).status).toBe(200);
	});

	it('is answered by the driver, and changed by nobody but its author', async () => {
		const note = await write(coach);
		const answered = await ask(driver, 'POST', `/${note.id}/replies`, { body: 'I felt that.' });
		expect(answered.status).toBe(201);
		expect((await (await ask(coach, 'GET', `/${note.id}`)).json()).replies).toMatchObject([
			{ body: 'I felt that.', own: false, author: { name: 'Mira Tansley' } }
		]);
		expect((await ask(driver, 'PATCH', `/${note.id}`, content({ revision: 1 }))).status).toBe(404);
		expect((await ask(driver, 'DELETE', `/${note.id}`)).status).toBe(404);
	});

	it('for all is read by every driver whom its author coaches there, and by nobody else', async () => {
		const { id } = await write(coach, { driver: null });
		const jonas = await makePerson('Jonas Velde');
		const stranger = await makePerson('Tomas Ruud');
		await storedRun(jonas, run);
		await storedRun(stranger, run);
		const grant = await makeGrant(jonas, { to: rhea });
		const jar = await signedIn(jonas);
		expect(await listed(jar)).toContain(id);
		expect(await listed(await signedIn(stranger))).not.toContain(id);
		await database()('grants').where({ id: grant }).update({ revoked_at: new Date() });
		expect(await listed(jar)).not.toContain(id);
	});

	it.each([
		{ name: 'nothing said', more: { body: ' ' }, status: 400 },
		{ name: 'a corner of another layout', more: { corner: '0'.repeat(26) }, status: 404 },
		{ name: 'a driver who admits nobody', more: { driver: '0'.repeat(26) }, status: 404 },
		{ name: 'a place that is none', more: { startM: -4 }, status: 400 }
	])('refuses $name', async ({ more, status }) => {
		const body = { layout: run.layoutPublicId, driver: mira.publicId, ...content(), ...more };
		expect((await ask(coach, 'POST', '', body)).status).toBe(status);
	});
});

describe('who may see a note for a driver', () => {
	it('is the driver, their guardian, its author and whom the driver opened the layout to; each only while that holds', async () => {
		const child = await makePerson('Mira Tansley', { isMinor: true });
		const own = await storedRun(child, run);
		const team = await makeOrganisation();
		const people = {
			author: await makePerson('an author'),
			guardian: await makePerson('a guardian'),
			manager: await makePerson('a manager'),
			member: await makePerson('a team mate'),
			'coach of the run': await makePerson('coach of a run'),
			stranger: await makePerson('a stranger')
		};
		const grants = [
			await makeGrant(child, { to: people.author }),
			await makeGrant(child, { to: team }),
			await makeGrant(child, { to: people['coach of the run'], scope: 'run', runId: own.runId })
		];
		await addGuardian(people.guardian, child);
		await addMember(team, people.manager, 'manager');
		await addMember(team, people.member, 'driver');
		const { id } = await write(await signedIn(people.author), { driver: child.publicId });
		const statuses = async () =>
			Object.fromEntries(
				await Promise.all(
					Object.entries(people).map(async ([who, person]) => [
						who,
						(await ask(await signedIn(person), 'GET', `/${id}`)).status
					])
				)
			);
		const others = { member: 404, stranger: 404, 'coach of the run': 404 };
		expect(await statuses()).toEqual({ author: 200, guardian: 200, manager: 200, ...others });
		await database()('grants').whereIn('id', grants).update({ revoked_at: new Date() });
		expect(await statuses()).toEqual({ author: 404, guardian: 200, manager: 404, ...others });
		const jar = await signedIn(people.author);
		expect((await ask(jar, 'PATCH', `/${id}`, content({ revision: 1 }))).status).toBe(404);
		expect((await ask(jar, 'POST', `/${id}/restore`)).status).toBe(404);
		expect((await ask(jar, 'POST', `/${id}/replies`, { body: 'x' })).status).toBe(404);
		expect((await ask(await signedIn(child), 'GET', `/${id}`)).status).toBe(200);
	});
});
