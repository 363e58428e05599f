import '../helpers/server.ts';
import { rm } from 'node:fs/promises';
import { gunzipSync } from 'node:zlib';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { decodePublicId } from '../../src/lib/server/db/publicId.ts';
import { environment } from '../../src/lib/server/environment.ts';
import { AnalysisPool } from '../../src/lib/server/importing/analysisPool.ts';
import { CODE_VERSION } from '../../src/lib/server/importing/storeRun.ts';
import { JobRunner } from '../../src/lib/server/jobs/jobRunner.ts';
import { queueOlderReadings } from '../../src/lib/server/jobs/reanalyse.ts';
import { rawStore } from '../../src/lib/server/storage/store.ts';
import type { ColumnMapping } from '../../src/lib/schemas/columnMapping.ts';
import type { RunView } from '../../src/lib/schemas/views.ts';
import type { CookieJar } from '../helpers/cookieJar.ts';
import { addMember, makeOrganisation, makePerson, signedIn, type TestPerson } from '../helpers/factories.ts';
import {
	analysisPool,
	closeImporting,
	fixture,
	getUpload,
	importFile,
	upload,
	workThrough
} from '../helpers/importing.ts';
import { testRequest } from '../helpers/testRequest.ts';

const db = database();
let lines: string[];
let headers: string[];

beforeAll(async () => {
	const text = gunzipSync(await fixture('closed-form/marrow_fen_noise_60hz.csv.gz')).toString();
	const [head, ...rest] = text.trim().split('\n');
	headers = head.trim().split(',');
	lines = rest;
});
afterAll(async () => {
	await closeImporting();
	await closeDatabase();
	await rm(environment().KERBNOTE_STORAGE, { recursive: true, force: true });
});

/** The run with headers that nobody understands; each call gives another file of the same kind. */
let cut = 0;
function unnamedFile(letter = 'q'): Uint8Array<ArrayBuffer> {
	const header = headers.map((_, i) => `${letter}${i}`).join(',');
	return Uint8Array.from(Buffer.from([header, ...lines.slice(0, lines.length - ++cut)].join('\n') + '\n'));
}

/** What the headers say in the file as it was. */
function answerFor(letter = 'q'): ColumnMapping {
	const channels: Record<string, { channel: 'time' | 'speed'; unit: string }> = {
		[headers.findIndex((name) => /time/i.test(name))]: { channel: 'time', unit: 's' },
		[headers.findIndex((name) => /speed/i.test(name))]: { channel: 'speed', unit: 'km/h' }
	};
	return {
		columns: headers.map((_, index) => ({
			header: `${letter}${index}`,
			index,
			...(channels[index] ?? { channel: null })
		}))
	};
}

async function post(path: string, body: unknown, jar: CookieJar): Promise<Response> {
	const headersOf = { 'content-type': 'application/json' };
	return await testRequest(path, { method: 'POST', body: JSON.stringify(body), headers: headersOf, jar });
}

describe('a file that nobody understands', () => {
	it('waits with a question, goes on with the answer, and the next of its kind needs none', async () => {
		const jar = await signedIn(await makePerson());
		const asked = await importFile(jar, 'a.csv', unnamedFile());
		expect(asked).toMatchObject({ state: 'needs_answer', error: { code: 'needs_answer' }, runs: [], remembered: null });
		expect(asked.error?.question?.columns.map(({ header }) => header)).toContain('q0');
		const path = `/api/v1/uploads/${asked.id}/mapping`;
		expect((await post(path, { mapping: answerFor(), remember: 'me' }, jar)).status).toBe(202);
		await workThrough();
		const answered = await getUpload(jar, asked.id);
		expect(answered).toMatchObject({ state: 'analysed', remembered: { scope: 'me', used: false, mayForget: true } });
		expect(answered.runs).toHaveLength(1);

		const next = await importFile(jar, 'b.csv', unnamedFile());
		expect(next).toMatchObject({ state: 'analysed', remembered: { scope: 'me', used: true } });
		expect(next.mapping).toEqual(answerFor());
		expect(next.runs[0].layout.id).toBe(answered.runs[0].layout.id);

		expect((await testRequest(path, { method: 'DELETE', jar })).status).toBe(204);
		expect((await testRequest(path, { method: 'DELETE', jar })).status).toBe(404);
		expect(await importFile(jar, 'c.csv', unnamedFile())).toMatchObject({ state: 'needs_answer' });
	}, 180_000);

	it('is answered for a whole organisation, and for nobody else', async () => {
		const [team, other] = [await makeOrganisation(), await makeOrganisation('Another team')];
		const person = async (name: string, organisation: number): Promise<[TestPerson, CookieJar]> => {
			const who = await makePerson(name);
			await addMember(organisation, who, 'driver');
			return [who, await signedIn(who)];
		};
		const [, miras] = await person('Mira Tansley', team);
		const [, jonas] = await person('Jonas Velde', team);
		const [, strangers] = await person('Tomas Ruud', other);
		const asked = await importFile(miras, 'a.csv', unnamedFile('z'));
		const path = `/api/v1/uploads/${asked.id}/mapping`;
		const foreign = { mapping: answerFor('z'), remember: 'organisation', organisation: '0'.repeat(26) };
		expect((await post(path, foreign, miras)).status).toBe(400);
		const shared = { mapping: answerFor('z'), remember: 'organisation' };
		expect((await post(path, shared, miras)).status).toBe(202);
		expect(await importFile(jonas, 'b.csv', unnamedFile('z'))).toMatchObject({
			state: 'analysed',
			remembered: { scope: 'organisation', used: true, mayForget: false }
		});
		expect(await importFile(strangers, 'c.csv', unnamedFile('z'))).toMatchObject({ state: 'needs_answer' });
	}, 180_000);
});

describe('two files of a new circuit', () => {
	it('that end at the same moment make one layout', async () => {
		const owner = await makePerson();
		const jar = await signedIn(owner);
		await upload(jar, 'a.csv.gz', await fixture('closed-form/marrow_fen_noise_60hz.csv.gz'));
		await upload(jar, 'b.csv.gz', await fixture('closed-form/marrow_fen_session_60hz.csv.gz'));
		const threads = new AnalysisPool(2);
		let ended = 0;
		let bothEnded = () => {};
		const both = new Promise<void>((resolve) => (bothEnded = resolve));
		const pool: Pick<AnalysisPool, 'run'> = {
			run: async (...input) => {
				const answer = await threads.run(...input);
				if (++ended === 2) bothEnded();
				await both;
				return answer;
			}
		};
		const runner = new JobRunner({ db, store: rawStore(), pool, slots: 2, pollMs: 20 });
		await runner.start();
		const open = () => db('jobs').where({ kind: 'importRun' }).whereIn('status', ['waiting', 'running']).first('id');
		while (await open()) await new Promise((done) => setTimeout(done, 20));
		await runner.stop(10_000);
		await threads.close();
		const runs = await db('runs').where({ owner_id: owner.id }).select<{ layout_id: number }[]>('layout_id');
		expect(runs).toHaveLength(2);
		expect(new Set(runs.map(({ layout_id }) => layout_id)).size).toBe(1);
		expect(await db('circuits').where({ created_by: owner.id })).toHaveLength(1);
		// Who came second was analysed again, on the layout of who came first.
		expect(ended).toBe(3);
	}, 180_000);
});

describe('a run that was read before', () => {
	let owner: TestPerson;
	let jar: CookieJar;
	let run: RunView;
	let uploadId: string;

	beforeAll(async () => {
		owner = await makePerson();
		jar = await signedIn(owner);
		const bytes = await fixture('closed-form/marrow_fen_noise_60hz.csv.gz');
		const view = await importFile(jar, 'a.csv.gz', bytes);
		uploadId = view.id;
		run = await (await testRequest(`/api/v1/runs/${view.runs[0].id}`, { jar })).json();
	}, 180_000);

	const lapsNow = async () => {
		const now: RunView = await (await testRequest(`/api/v1/runs/${run.id}`, { jar })).json();
		return now.laps.map(({ id }) => id);
	};

	it('is read again on request, and keeps the ids of its laps', async () => {
		const response = await testRequest(`/api/v1/uploads/${uploadId}/again`, { method: 'POST', jar });
		expect([response.status, (await response.json()).state]).toEqual([202, 'stored']);
		await workThrough();
		expect(await getUpload(jar, uploadId)).toMatchObject({ state: 'analysed' });
		expect(await lapsNow()).toEqual(run.laps.map(({ id }) => id));
	}, 180_000);

	it('is read again by a better analysis, stays seen meanwhile, and stays where reading fails', async () => {
		const mine = () => db('uploads').where({ owner_id: owner.id });
		const age = async () => {
			await db('uploads').whereNot({ owner_id: owner.id }).update({ analysed_with: CODE_VERSION });
			await mine().update({ analysed_with: 'analysis/0' });
		};
		await age();
		expect(await queueOlderReadings(db)).toBe(1);
		expect(await getUpload(jar, uploadId)).toMatchObject({ state: 'analysed' });
		await workThrough();
		expect(await mine().first()).toMatchObject({ analysed_with: CODE_VERSION, state: 'analysed' });
		expect(await lapsNow()).toEqual(run.laps.map(({ id }) => id));
		expect(await queueOlderReadings(db)).toBe(0);
		await age();
		await queueOlderReadings(db);
		const refusal = { code: 'no_header', message: 'x', row: null, column: null, remedy: 'y' } as const;
		await workThrough({ run: async () => ({ refusal, headers: null, remembered: null }) });
		expect(await mine().first()).toMatchObject({ analysed_with: CODE_VERSION, state: 'analysed', error: null });
		expect(await lapsNow()).toEqual(run.laps.map(({ id }) => id));
	}, 180_000);

	it('lies on the layout that a person chooses, of those that they may see', async () => {
		const patch = (layout: string) =>
			testRequest(`/api/v1/runs/${run.id}`, {
				method: 'PATCH',
				body: JSON.stringify({ layout, startedAt: '2026-05-24T10:00:00Z', car: 'Number 12' }),
				headers: { 'content-type': 'application/json' },
				jar
			});
		expect((await patch('0'.repeat(26))).status).toBe(404);
		expect((await patch(run.layout.id)).status).toBe(200);
		await workThrough(analysisPool());
		const now: RunView = await (await testRequest(`/api/v1/runs/${run.id}`, { jar })).json();
		expect(now).toMatchObject({ layout: { id: run.layout.id }, startedAt: '2026-05-24T10:00:00.000Z' });
		expect(now.car?.name).toBe('Number 12');
		const row = await db('runs')
			.where({ public_id: decodePublicId(run.id) })
			.first();
		expect(row.chosen_layout_id).toBe(row.layout_id);
	}, 180_000);
});
