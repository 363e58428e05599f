import '../helpers/server.ts';
import { rm } from 'node:fs/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { FocusList, FocusPoint } from '../../src/lib/schemas/focus.ts';
import type { Target } from '../../src/lib/schemas/target.ts';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { environment } from '../../src/lib/server/environment.ts';
import type { CookieJar } from '../helpers/cookieJar.ts';
import { makeGrant, makePerson, signedIn, type TestPerson } from '../helpers/factories.ts';
import { storedRun, type StoredRun } from '../helpers/storedRun.ts';
import { testRequest } from '../helpers/testRequest.ts';

const HOUR_MS = 3_600_000;
const db = database();
let mira: TestPerson;
let rhea: TestPerson;
let first: StoredRun;
let grantId: number;
let driver: CookieJar;
let coach: CookieJar;

const ask = async (jar: CookieJar, method: string, path: string, body?: unknown) =>
	await testRequest(`/api/v1/focus${path}`, {
		jar,
		method,
		...(body !== undefined && { body: JSON.stringify(body), headers: { 'content-type': 'application/json' } })
	});
const target = (more: Partial<Target> = {}): Target => ({
	kind: 'peak_brake',
	least: null,
	most: 75,
	base: 'value',
	scope: { dryOnly: false, afterLap: null, holdsOver: null },
	notSlower: false,
	text: '',
	...more
});
async function open(jar: CookieJar, more: Record<string, unknown> = {}): Promise<FocusPoint> {
	const response = await ask(jar, 'POST', '', {
		driver: mira.publicId,
		layout: first.layoutPublicId,
		car: null,
		corner: first.cornerPublicId,
		target: target(),
		...more
	});
	expect(response.status, await response.clone().text()).toBe(201);
	return await response.json();
}
const read = async (id: string, jar = driver): Promise<FocusPoint> => await (await ask(jar, 'GET', `/${id}`)).json();

/** A run of the same laps, so many hours from now, of which each clean lap's pass of the corner has these values. */
async function later(hours: number, passes: { peak: number; timeS: number }[]): Promise<StoredRun> {
	const run = await storedRun(mira, first);
	const at = new Date(Date.now() + hours * HOUR_MS);
	await db('runs').where({ id: run.runId }).update({ sort_at: at, started_at: at, conditions: 'dry' });
	const corner = await db('corners').where({ layout_id: first.layoutId }).orderBy('id').first('id');
	for (const [i, lapId] of run.lapIds.entries()) {
		const pass = passes[i % passes.length];
		await db('lap_corner_metrics')
			.where({ lap_id: lapId, corner_id: corner.id })
			.update({ peak_pct: pass.peak, time_s: pass.timeS, plus_minus: '{}' });
	}
	return run;
}

beforeAll(async () => {
	mira = await makePerson();
	rhea = await makePerson('Rhea Calloway');
	first = await storedRun(mira);
	await db('runs')
		.where({ id: first.runId })
		.update({ sort_at: new Date(Date.now() - HOUR_MS) });
	grantId = await makeGrant(mira, { to: rhea });
	[driver, coach] = [await signedIn(mira), await signedIn(rhea)];
}, 120_000);

afterAll(async () => {
	await closeDatabase();
	await rm(environment().KERBNOTE_STORAGE, { recursive: true, force: true });
});

describe('a focus', () => {
	it('scores every lap of later runs, and none of those before', async () => {
		const { id, runs } = await open(coach);
		expect(runs).toEqual([]);
		const run = await later(1, [
			{ peak: 74, timeS: 6 },
			{ peak: 90, timeS: 6.4 }
		]);
		const point = await read(id);
		expect(point.runs.map((one) => one.run)).toEqual([run.runPublicId]);
		const clean = run.lapIds.length;
		expect(point.scored).toBe(clean);
		expect(point.met).toBe(Math.ceil(clean / 2));
		expect(point.runs[0].laps.filter(({ outcome }) => outcome === 'met').every(({ value }) => value === 74)).toBe(true);
		// Welch's difference of two groups of equal values is the difference of the values.
		expect(point.paidS?.differenceS).toBeCloseTo(-0.4, 9);
	});

	it('tells the trend and the time found against the median before it was set', async () => {
		const { id } = await open(coach);
		await later(2, [{ peak: 90, timeS: 6.4 }]);
		await later(3, [{ peak: 70, timeS: 5.9 }]);
		const point = await read(id);
		expect(point.trend).toBe('up');
		const [{ usual }] = await db('lap_corner_metrics')
			.join('corners', 'corners.id', 'lap_corner_metrics.corner_id')
			.whereIn('lap_id', first.lapIds)
			.where('lap_corner_metrics.number', 1)
			.select(db.raw('MEDIAN(time_s) OVER () AS usual'))
			.limit(1);
		expect(point.foundS).toBeCloseTo(Number(usual) - 5.9, 9);
	});

	it('is proposed for closing when it holds over the chosen laps, and people close it', async () => {
		const holdsOver = { laps: 2, of: 2 };
		const { id } = await open(coach, {
			target: target({ scope: { dryOnly: true, afterLap: null, holdsOver } })
		});
		await later(4, [{ peak: 90, timeS: 6.4 }]);
		expect((await read(id)).proposed).toBe(false);
		await later(5, [{ peak: 70, timeS: 6 }]);
		expect(await read(id)).toMatchObject({ proposed: true, state: 'open' });
		expect(await (await ask(driver, 'PATCH', `/${id}`, { state: 'met' })).json()).toMatchObject({ state: 'met' });
		expect((await read(id)).closedAt).not.toBeNull();
		expect(await (await ask(coach, 'PATCH', `/${id}`, { state: 'open' })).json()).toMatchObject({
			state: 'open',
			closedAt: null
		});
	});

	it('says that a lap met it and was slower in the corner', async () => {
		const { id } = await open(coach, { target: target({ notSlower: true }) });
		await later(6, [{ peak: 60, timeS: 99 }]);
		const point = await read(id);
		expect(point.runs.at(-1)?.metButSlower).toBe(first.lapIds.length);
		expect(point.metButSlower).toBeGreaterThan(0);
	});

	it('takes its target from a note, and shows the note beside it', async () => {
		const note = await testRequest('/api/v1/notes', {
			jar: coach,
			method: 'POST',
			headers: { 'content-type': 'application/json' },
			body: JSON.stringify({
				layout: first.layoutPublicId,
				driver: mira.publicId,
				corner: first.cornerPublicId,
				startM: 10,
				endM: 60,
				body: 'Squeeze to three quarters.',
				target: target()
			})
		});
		const { id: noteId } = await note.json();
		const point = await open(coach, { note: noteId, corner: null, target: null });
		expect(point).toMatchObject({
			target: target(),
			corner: { id: first.cornerPublicId },
			note: { id: noteId, body: 'Squeeze to three quarters.' }
		});
	});

	it('scores no lap in another car', async () => {
		const { id } = await open(coach);
		const run = await later(7, [{ peak: 70, timeS: 6 }]);
		const [carId] = await db('cars').insert({ public_id: Buffer.alloc(16, 9), owner_id: mira.id, name: 'Lark' });
		await db('runs').where({ id: run.runId }).update({ car_id: carId });
		expect((await read(id)).runs.map((one) => one.run)).not.toContain(run.runPublicId);
	});

	it('says gently that more than three are too many', async () => {
		const list: FocusList = await (await ask(driver, 'GET', '')).json();
		expect(list.points.filter(({ state }) => state === 'open').length).toBeGreaterThan(3);
		expect(list.tooMany).toBe(true);
	});

	it.each([
		{ name: 'without a corner', more: { corner: null }, status: 400 },
		{ name: 'without a target', more: { target: null }, status: 400 },
		{ name: 'in a car that is not the driver’s', more: { car: '0'.repeat(26) }, status: 404 }
	])('is refused $name', async ({ more, status }) => {
		const body = {
			driver: mira.publicId,
			layout: first.layoutPublicId,
			car: null,
			corner: first.cornerPublicId,
			target: target(),
			...more
		};
		expect((await ask(coach, 'POST', '', body)).status).toBe(status);
	});

	it('closes to the coach at once when the driver takes the grant back, and stays with the driver', async () => {
		const { id } = await open(coach);
		await db('grants').where({ id: grantId }).update({ revoked_at: new Date() });
		expect((await ask(coach, 'GET', `/${id}`)).status).toBe(404);
		expect((await ask(coach, 'PATCH', `/${id}`, { state: 'met' })).status).toBe(404);
		expect((await ask(coach, 'GET', `?driver=${mira.publicId}`)).status).toBe(404);
		expect((await ask(driver, 'GET', `/${id}`)).status).toBe(200);
	});
});
