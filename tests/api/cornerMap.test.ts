import '../helpers/server.ts';
import { rm } from 'node:fs/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { CornerMapAnswer, CornerMapView, MapCorner } from '../../src/lib/schemas/cornerMap.ts';
import { cornerMapAnswerSchema, cornerMapViewSchema } from '../../src/lib/schemas/cornerMap.ts';
import { problemSchema } from '../../src/lib/schemas/api.ts';
import { runViewSchema, type RunView } from '../../src/lib/schemas/views.ts';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { decodePublicId } from '../../src/lib/server/db/publicId.ts';
import { environment } from '../../src/lib/server/environment.ts';
import { JobRunner } from '../../src/lib/server/jobs/jobRunner.ts';
import { rawStore } from '../../src/lib/server/storage/store.ts';
import type { CookieJar } from '../helpers/cookieJar.ts';
import { makePerson, signedIn } from '../helpers/factories.ts';
import { analysisPool, closeImporting, fixture, importFile } from '../helpers/importing.ts';
import { testRequest } from '../helpers/testRequest.ts';

let jar: CookieJar;
let runId: string;
let layoutId: string;

beforeAll(async () => {
	jar = await signedIn(await makePerson());
	const file = await fixture('closed-form/marrow_fen_session_20hz.csv.gz');
	const imported = await importFile(jar, 'session.csv.gz', file);
	runId = imported.runs[0].id;
	layoutId = (await getRun()).layout.id;
}, 120_000);

afterAll(async () => {
	await closeImporting();
	await closeDatabase();
	await rm(environment().KERBNOTE_STORAGE, { recursive: true, force: true });
});

async function getRun(): Promise<RunView> {
	return runViewSchema.parse(await (await testRequest(`/api/v1/runs/${runId}`, { jar })).json());
}

async function getMap(): Promise<CornerMapView> {
	return cornerMapViewSchema.parse(await (await testRequest(`/api/v1/layouts/${layoutId}/corner-map`, { jar })).json());
}

function post(body: unknown): Promise<Response> {
	return testRequest(`/api/v1/layouts/${layoutId}/corner-map`, {
		method: 'POST',
		body: JSON.stringify(body),
		headers: { 'content-type': 'application/json' },
		jar
	});
}

async function change(body: unknown, status: number): Promise<CornerMapAnswer> {
	const response = await post(body);
	expect(response.status).toBe(status);
	return cornerMapAnswerSchema.parse(await response.json());
}

/** Works until no layout waits to be cut. */
async function cutAll(): Promise<void> {
	const db = database();
	const runner = new JobRunner({ db, store: rawStore(), pool: analysisPool(), slots: 1, pollMs: 20 });
	await runner.start();
	const open = () => db('jobs').where({ kind: 'recutLayout' }).whereIn('status', ['waiting', 'running']).first('id');
	while (await open()) await new Promise((done) => setTimeout(done, 20));
	await runner.stop(10_000);
}

const numbered = (corners: readonly Pick<MapCorner, 'id' | 'number'>[]) =>
	corners.flatMap(({ id, number }) => (number === null ? [] : [[number, id]]));

/** The run's rows of metrics as stored: lap, corner's id, and one number. */
function metrics(): Promise<{ number: number; lap_id: number; corner_id: number; min_kmh: number; time_s: number }[]> {
	return database()('lap_corner_metrics')
		.join('laps', 'laps.id', 'lap_corner_metrics.lap_id')
		.join('runs', 'runs.id', 'laps.run_id')
		.where('runs.public_id', decodePublicId(runId))
		.orderBy(['lap_id', 'lap_corner_metrics.number'])
		.select('lap_corner_metrics.number', 'lap_id', 'corner_id', 'min_kmh', 'lap_corner_metrics.time_s');
}

describe('a corner map', () => {
	it('shows corners and kinks with ids', async () => {
		const map = await getMap();
		expect(map).toMatchObject({ version: 1, pending: null });
		expect(map.versions.map(({ version }) => version)).toEqual([1]);
		expect(numbered(map.corners).length).toBe(9);
	});

	it('says in a preview what a split changes, and stores nothing', async () => {
		const [first] = (await getMap()).corners;
		const edit = { kind: 'split', corner: first.id, atM: (first.startM + first.apexM) / 2 };
		const answer = await change({ basedOn: 1, edits: [edit], preview: true }, 200);
		expect(answer.version).toBeNull();
		expect(numbered(answer.corners).length).toBe(10);
		expect(answer.changes.filter(({ before }) => before === null).length).toBe(1);
		expect(answer.laps).toBe((await getRun()).laps.length);
		expect(await getMap()).toMatchObject({ version: 1, pending: null });
	});

	it('names a corner at once, without another version', async () => {
		const [, second] = (await getMap()).corners;
		const answer = await change({ basedOn: 1, edits: [{ kind: 'name', corner: second.id, name: 'Fernside' }] }, 200);
		expect(answer).toMatchObject({ version: null, laps: 0 });
		expect((await getMap()).corners[1].name).toBe('Fernside');
	});

	it('cuts all stored laps by a merge in one go, keeps ids and times, and undoes it to the same numbers', async () => {
		const [before, map, run] = [await metrics(), await getMap(), await getRun()];
		const [first, second] = map.corners.filter(({ number }) => number !== null);
		const answer = await change({ basedOn: 1, edits: [{ kind: 'merge', first: first.id, second: second.id }] }, 202);
		expect(answer.version).toBe(2);
		// until the laps are cut, everything stays, and nobody edits
		expect(await getMap()).toMatchObject({ version: 1, pending: 2 });
		expect(await metrics()).toEqual(before);
		expect((await post({ basedOn: 1, edits: [{ kind: 'unnumber', corner: second.id }] })).status).toBe(409);

		await cutAll();
		const cut = await getMap();
		expect(cut).toMatchObject({ version: 2, pending: null });
		expect(numbered(cut.corners).map(([, id]) => id)).toEqual(
			numbered(map.corners)
				.map(([, id]) => id)
				.filter((id) => id !== second.id)
		);
		const merged = await getRun();
		expect(merged.laps.map(({ id, timeS }) => [id, timeS])).toEqual(run.laps.map(({ id, timeS }) => [id, timeS]));
		expect(merged.corners.filter(({ number }) => number !== null).length).toBe(8);
		const after = await metrics();
		expect(after.length).toBe((before.length / 9) * 8);
		// corner 3, now 2, is untouched
		const third = (rows: typeof before, number: number) => rows.filter((row) => row.number === number);
		expect(third(after, 3).map((row) => row.corner_id)).toEqual(third(before, 4).map((row) => row.corner_id));
		third(after, 3).forEach((row, i) => expect(row.min_kmh).toBeCloseTo(third(before, 4)[i].min_kmh, 9));

		await change({ basedOn: 2, restore: 1 }, 202);
		await cutAll();
		expect(await getMap()).toMatchObject({ version: 3, pending: null });
		const again = await metrics();
		expect(again.map(({ corner_id, number }) => [corner_id, number])).toEqual(
			before.map(({ corner_id, number }) => [corner_id, number])
		);
		// the first reading drew the path itself, the later ones lie on the path as stored: some µs apart
		again.forEach((row, i) => expect(row.time_s ?? 0).toBeCloseTo(before[i].time_s ?? 0, 4));
		expect((await getRun()).theoreticalBestS).toBeCloseTo(run.theoreticalBestS ?? NaN, 3);
	}, 120_000);

	it.each([
		{ name: 'a version that is not the newest', body: { basedOn: 1, restore: 1 }, status: 409 },
		{ name: 'a version that was never there', body: { basedOn: 3, restore: 3 }, status: 400 },
		{ name: 'no step', body: { basedOn: 3, edits: [] }, status: 400 },
		{
			name: 'a corner of another circuit',
			body: { basedOn: 3, edits: [{ kind: 'unnumber', corner: '0'.repeat(26) }] },
			status: 400
		}
	])('refuses $name', async ({ body, status }) => {
		const response = await post(body);
		expect(response.status).toBe(status);
		expect(problemSchema.safeParse(await response.json()).success).toBe(true);
	});

	it('takes a version back that could not be cut', async () => {
		const [first] = (await getMap()).corners.filter(({ number }) => number !== null);
		await change({ basedOn: 3, edits: [{ kind: 'unnumber', corner: first.id }] }, 202);
		const db = database();
		await db('jobs').where({ kind: 'recutLayout', status: 'waiting' }).update({ attempts: 4 });
		await cutAll();
		expect(await getMap()).toMatchObject({ version: 3, pending: null });
		expect((await getMap()).versions[0].version).toBe(3);
	});
});
