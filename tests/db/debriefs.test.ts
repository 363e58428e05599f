import '../helpers/server.ts';
import { rm } from 'node:fs/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { DebriefContent, DebriefView } from '../../src/lib/schemas/debrief.ts';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { environment } from '../../src/lib/server/environment.ts';
import { openLink } from '../../src/lib/server/services/debriefLinks.ts';
import type { CookieJar } from '../helpers/cookieJar.ts';
import { makeGrant, makePerson, signedIn, type TestPerson } from '../helpers/factories.ts';
import { storedRun, type StoredRun } from '../helpers/storedRun.ts';
import { testRequest } from '../helpers/testRequest.ts';

const db = database();
let mira: TestPerson;
let rhea: TestPerson;
let run: StoredRun;
let driver: CookieJar;
let coach: CookieJar;

const ask = async (jar: CookieJar, method: string, path: string, body?: unknown) =>
	await testRequest(`/api/v1/debriefs${path}`, {
		jar,
		method,
		...(body !== undefined && { body: JSON.stringify(body), headers: { 'content-type': 'application/json' } })
	});
/** A draft on a run of its own, on the same layout. */
async function draft(): Promise<DebriefView> {
	const own = await storedRun(mira, run);
	const [reference, lap] = own.lapPublicIds;
	const response = await ask(coach, 'POST', '', { run: own.runPublicId, lap, reference });
	expect(response.status, await response.clone().text()).toBe(201);
	return await response.json();
}
const read = async (jar: CookieJar, id: string): Promise<DebriefView> => await (await ask(jar, 'GET', `/${id}`)).json();
const save = async (id: string, revision: number, content: DebriefContent) =>
	await ask(coach, 'PUT', `/${id}`, { revision, content });
async function sent(): Promise<DebriefView> {
	const { id, document, revision } = await draft();
	const content = {
		...document.content,
		tasks: [{ key: 'task-1', focus: null, title: 'Wait with the throttle', where: '1 Fernside' }]
	};
	expect((await save(id, revision, content)).status).toBe(200);
	const response = await ask(coach, 'POST', `/${id}/send`, { revision: revision + 1 });
	expect(response.status, await response.clone().text()).toBe(200);
	return await response.json();
}
const lettersTo = async (person: TestPerson, kind: string): Promise<number> =>
	Number((await db('mail_log').where({ to_person_id: person.id, kind }).count({ n: '*' }))[0].n);

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

describe('a draft', () => {
	it('says what was measured in the corners of the short list, in the order of their cost, and sums to the gap', async () => {
		const { document, mayEdit } = await draft();
		expect(mayEdit).toBe(true);
		const { facts, content } = document;
		expect(facts.ledger.reduce((sum, { totalS }) => sum + totalS, 0)).toBeCloseTo(facts.gapS, 6);
		expect(content.opening).toMatch(/^Mira, /);
		expect(content.signature).toBe('Rhea');
		const drafted = content.sections.filter(({ lines }) => lines.length > 0);
		expect(facts.gapS <= 0 || drafted.length > 0).toBe(true);
		for (const { corner } of drafted) expect(facts.corners.map(({ number }) => number)).toContain(corner);
	});

	it('takes the coach’s own phrase for a finding and their notes on the corner', async () => {
		const first = await draft();
		const line = first.document.content.sections.flatMap(({ lines }) => lines)[0];
		const corner = first.document.content.sections[0].corner;
		const place = await db('corner_places')
			.join('corners', 'corners.id', 'corner_places.corner_id')
			.where({ layout_id: run.layoutId, number: corner })
			.first('corners.id', 'start_m', 'end_m');
		await db('zone_notes').insert({
			public_id: Buffer.alloc(16, 5),
			author_id: rhea.id,
			driver_id: mira.id,
			layout_id: run.layoutId,
			path_version: 1,
			corner_id: place.id,
			start_m: place.start_m,
			end_m: place.end_m,
			body: 'Look further ahead.'
		});
		await db('coach_phrases').insert({
			public_id: Buffer.alloc(16, 6),
			person_id: rhea.id,
			finding_code: line.code,
			body: '{driver}, patience at {corner}.'
		});
		const { document } = await draft();
		const section = document.content.sections.find((one) => one.corner === corner);
		expect(section?.words).toMatch(/^Look further ahead\.\n\nMira, patience at corner\u00a0\d+\./);
		await db('zone_notes').where({ author_id: rhea.id }).delete();
		await db('coach_phrases').where({ person_id: rhea.id }).delete();
	});

	it('is gone on with, not written twice, and seen by its author alone', async () => {
		const { id, run: of } = await draft();
		const again: DebriefView = await (await ask(coach, 'POST', '', { run: of })).json();
		expect(again.id).toBe(id);
		expect((await ask(driver, 'GET', `/${id}`)).status).toBe(404);
	});

	it('comes back after it was dropped', async () => {
		const { id } = await draft();
		expect((await ask(coach, 'DELETE', `/${id}`)).status).toBe(204);
		expect((await ask(coach, 'GET', `/${id}`)).status).toBe(404);
		expect((await ask(coach, 'POST', `/${id}/restore`)).status).toBe(200);
		expect((await ask(coach, 'GET', `/${id}`)).status).toBe(200);
	});
});

describe('two windows on one draft', () => {
	it('tell the later writer, with both texts, and overwrite nothing', async () => {
		const { id, document, revision } = await draft();
		const opening = (text: string) => ({ ...document.content, opening: text });
		const answers = await Promise.all([
			save(id, revision, opening('from the first window')),
			save(id, revision, opening('from the second window'))
		]);
		expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
		const problem = await answers.find(({ status }) => status === 409)?.json();
		const now = await read(coach, id);
		expect(problem.conflict).toMatchObject({
			revision: revision + 1,
			theirs: { opening: now.document.content.opening }
		});
		expect(problem.conflict.yours.opening).not.toBe(now.document.content.opening);
	});

	it('send nothing that the sender has not seen', async () => {
		const { id, document, revision } = await draft();
		await save(id, revision, { ...document.content, opening: 'newer' });
		expect((await ask(coach, 'POST', `/${id}/send`, { revision })).status).toBe(409);
		expect((await read(coach, id)).sentAt).toBeNull();
	});

	it('send it once, however often they press', async () => {
		const { id, revision } = await draft();
		const before = await lettersTo(mira, 'debriefSent');
		const answers = await Promise.all([1, 2, 3].map(() => ask(coach, 'POST', `/${id}/send`, { revision })));
		expect(answers.map(({ status }) => status)).toEqual([200, 200, 200]);
		expect(await lettersTo(mira, 'debriefSent')).toBe(before + 1);
		expect((await ask(coach, 'POST', `/${id}/send`, { revision })).status).toBe(200);
		expect(await lettersTo(mira, 'debriefSent')).toBe(before + 1);
	});
});

describe('a sent debrief', () => {
	it('stays as it was, whatever changes afterwards', async () => {
		const { id, document, revision } = await sent();
		expect((await save(id, revision, { ...document.content, opening: 'no, rather' })).status).toBe(409);
		await db('debriefs').update({ content: JSON.stringify({ ...document.content, opening: 'x' }) });
		await db('people').where({ id: mira.id }).update({ name: 'Mira Other' });
		expect((await read(driver, id)).document).toEqual(document);
		await db('people').where({ id: mira.id }).update({ name: 'Mira Tansley' });
	});

	it('is read, answered and ticked by the driver, and the coach is told', async () => {
		const { id } = await sent();
		expect((await read(coach, id)).readAt).toBeNull();
		await ask(coach, 'POST', `/${id}/read`);
		expect((await read(coach, id)).readAt, 'a coach leaves no receipt').toBeNull();
		await ask(driver, 'POST', `/${id}/read`);
		const receipt = (await read(coach, id)).readAt;
		expect(receipt).not.toBeNull();
		await ask(driver, 'POST', `/${id}/read`);
		expect((await read(coach, id)).readAt).toBe(receipt);
		const before = await lettersTo(rhea, 'reply');
		expect((await ask(driver, 'POST', `/${id}/replies`, { body: 'Tried it on lap 3.' })).status).toBe(201);
		expect(await lettersTo(rhea, 'reply')).toBe(before + 1);
		const ticked = await ask(driver, 'PUT', `/${id}/ticks`, { item: 'task-1', ticked: true });
		expect((await ticked.json()).ticked).toEqual(['task-1']);
		expect((await read(coach, id)).replies).toMatchObject([{ body: 'Tried it on lap 3.', own: false }]);
		expect((await ask(coach, 'PUT', `/${id}/ticks`, { item: 'task-1', ticked: false })).status).toBe(404);
		expect((await ask(driver, 'PUT', `/${id}/ticks`, { item: 'task-9', ticked: true })).status).toBe(404);
	});

	it('closes to the coach when the driver takes the grant back, and stays with the driver', async () => {
		const other = await makePerson('Another coach');
		const grant = await makeGrant(mira, { to: other });
		const jar = await signedIn(other);
		const own = await storedRun(mira, run);
		const [reference, lap] = own.lapPublicIds;
		const { id, revision }: DebriefView = await (
			await ask(jar, 'POST', '', { run: own.runPublicId, lap, reference })
		).json();
		expect((await ask(jar, 'POST', `/${id}/send`, { revision })).status).toBe(200);
		await db('grants').where({ id: grant }).update({ revoked_at: new Date() });
		for (const [method, path, body] of [
			['GET', '', undefined],
			['PUT', '', { revision, content: { opening: '', signature: '', sections: [], tasks: [] } }],
			['POST', '/replies', { body: 'x' }],
			['POST', '/links', { days: 7 }]
		] as const) {
			expect((await ask(jar, method, `/${id}${path}`, body)).status, `${method} ${path}`).toBe(404);
		}
		expect((await ask(driver, 'GET', `/${id}`)).status).toBe(200);
	});
});

describe('a share link', () => {
	const link = async (jar: CookieJar, id: string, days = 7): Promise<string> =>
		(await (await ask(jar, 'POST', `/${id}/links`, { days })).json()).path;
	const open = async (path: string) => await testRequest(path);

	it('shows this debrief to whoever holds it, and tells no other site and no search engine', async () => {
		const { id, document } = await sent();
		const path = await link(coach, id);
		expect(path).toMatch(/^\/d\/[\w-]{43}$/);
		const page = await open(path);
		expect(page.status).toBe(200);
		const text = await page.text();
		expect(text).toContain(JSON.stringify(document.content.signature));
		expect(text).not.toContain(id);
		expect(text).not.toContain('@example.org');
		const [row] = await db('debrief_links').orderBy('id', 'desc').limit(1);
		expect(Buffer.from(row.token_hash).toString('base64url')).not.toBe(path.slice(3));
		expect(row.opened_at).not.toBeNull();
		expect((await read(coach, id)).links).toHaveLength(1);
	});

	it('opens nothing once it has expired or was revoked, and nothing by another token', async () => {
		const { id } = await sent();
		const [first, second] = [await link(coach, id), await link(driver, id)];
		await db('debrief_links')
			.where({ sent_debrief_id: db('sent_debriefs').max('id') })
			.where({ created_by: rhea.id })
			.update({ expires_at: new Date(Date.now() - 1000) });
		expect((await open(first)).status).toBe(404);
		expect((await open(second)).status).toBe(200);
		const [{ id: linkId }] = (await read(driver, id)).links;
		expect((await ask(coach, 'DELETE', `/${id}/links/${linkId}`)).status, 'not of one’s own making').toBe(404);
		expect((await ask(driver, 'DELETE', `/${id}/links/${linkId}`)).status).toBe(204);
		expect((await open(second)).status).toBe(404);
		expect((await open(`/d/${'x'.repeat(43)}`)).status).toBe(404);
	});

	it('ends when the driver no longer admits whoever made it', async () => {
		const other = await makePerson('Another coach');
		const grant = await makeGrant(mira, { to: other });
		const jar = await signedIn(other);
		const own = await storedRun(mira, run);
		const [reference, lap] = own.lapPublicIds;
		const { id, revision }: DebriefView = await (
			await ask(jar, 'POST', '', { run: own.runPublicId, lap, reference })
		).json();
		await ask(jar, 'POST', `/${id}/send`, { revision });
		const path = await link(jar, id);
		expect((await openLink(path.slice(3))).document.content.signature).toBe('Another');
		await db('grants').where({ id: grant }).update({ revoked_at: new Date() });
		await expect(openLink(path.slice(3))).rejects.toMatchObject({ status: 404 });
	});

	it('is made of nothing that was not sent', async () => {
		const { id } = await draft();
		expect((await ask(coach, 'POST', `/${id}/links`, { days: 7 })).status).toBe(404);
	});
});
