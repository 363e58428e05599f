import '../helpers/server.ts';
import { readFile, rm } from 'node:fs/promises';
import { gunzipSync, gzipSync } from 'node:zlib';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { analyseRun } from '../../src/lib/analysis/analyseRun.ts';
import { decodeTraceFrame } from '../../src/lib/analysis/trace/traceFrame.ts';
import { RunReader } from '../../src/lib/parse/runReader.ts';
import {
	runViewSchema,
	uploadViewSchema,
	type ComparisonDocument,
	type RunView,
	type UploadView
} from '../../src/lib/schemas/views.ts';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { environment } from '../../src/lib/server/environment.ts';
import type { CookieJar } from '../helpers/cookieJar.ts';
import { makePerson, signedIn, type TestPerson } from '../helpers/factories.ts';
import { closeImporting, fixture, getUpload, importFile, upload, workThrough } from '../helpers/importing.ts';
import { testRequest } from '../helpers/testRequest.ts';

const SESSION = 'closed-form/marrow_fen_session_60hz.csv.gz';

let person: TestPerson;
let jar: CookieJar;
let bytes: Uint8Array<ArrayBuffer>;
let imported: UploadView;
let run: RunView;

beforeAll(async () => {
	person = await makePerson();
	jar = await signedIn(person);
	bytes = await fixture(SESSION);
	imported = await importFile(jar, 'session.csv.gz', bytes);
	run = await (await testRequest(`/api/v1/runs/${imported.runs[0]?.id}`, { jar })).json();
}, 120_000);

afterAll(async () => {
	await closeImporting();
	await closeDatabase();
	await rm(environment().KERBNOTE_STORAGE, { recursive: true, force: true });
});

/** The same file through the core alone: the run, and two of its laps compared. */
const core = memoised(() => {
	const reader = new RunReader({ fileName: 'session.csv' });
	reader.push(gunzipSync(bytes));
	const raws = reader.end();
	const analysis = analyseRun(raws);
	const [reference, driver] = analysis.document.laps.filter((lap) => lap.clean).map(({ number }) => number);
	return {
		...analysis,
		compared: analyseRun(raws, { lap: driver, referenceLap: reference, grids: 'compared' }).document.comparison
	};
});

function memoised<Value>(make: () => Value): () => Value {
	let made: { value: Value } | undefined;
	return () => (made ??= { value: make() }).value;
}

describe('an upload', () => {
	it('becomes a run whose numbers are those of the core', () => {
		expect(uploadViewSchema.safeParse(imported).error).toBeUndefined();
		expect(imported).toMatchObject({ state: 'analysed', progress: 1, error: null, fileName: 'session.csv.gz' });
		expect(runViewSchema.safeParse(run).error).toBeUndefined();
		const { document } = core();
		expect(run.laps.map(({ number, kind, clean, reasons }) => ({ number, kind, clean, reasons }))).toEqual(
			document.laps.map(({ number, kind, clean, reasons }) => ({ number, kind, clean, reasons }))
		);
		run.laps.forEach((lap, i) =>
			expect(Math.abs(lap.timeS - document.laps[i].timeS)).toBeLessThanOrEqual(0.5e-6 + 1e-12)
		);
		// The database writes a double in 15 digits or a few more; a nanometre is more than anybody asks.
		const places = (corners: readonly { number: number | null; apexM: number; startM: number; endM: number }[]) =>
			[...corners]
				.sort((a, b) => a.apexM - b.apexM)
				.map(({ number, apexM, startM, endM }) => [number, ...[apexM, startM, endM].map((m) => m.toFixed(9))]);
		expect(places(run.corners)).toEqual(places(document.corners));
		expect(run.theoreticalBestS).toBeCloseTo(document.theoreticalBestS ?? NaN, 6);
	});

	it('keeps the raw file byte for byte', async () => {
		const response = await testRequest(`/api/v1/uploads/${imported.id}/file`, { jar });
		expect(response.headers.get('content-disposition')).toContain('attachment');
		expect(Buffer.from(await response.arrayBuffer()).equals(bytes)).toBe(true);
		expect(imported.sizeBytes).toBe(bytes.length);
	});

	it('gives each lap as columns whose time is exact to the microsecond', async () => {
		const { grids } = core();
		const lap = run.laps.find(({ id }) => id === run.bestLap?.id);
		const grid = grids.find(({ lapNumber }) => lapNumber === lap?.number);
		if (!lap || !grid) throw new Error('the fixture requires a clean lap');
		for (const encoding of ['packed', 'float']) {
			const response = await testRequest(`/api/v1/laps/${lap.id}/trace?encoding=${encoding}`, { jar });
			const frame = decodeTraceFrame(await response.arrayBuffer());
			expect(frame).toMatchObject({ lengthM: grid.lengthM, fromM: -grid.marginM, stepM: 1 });
			const timeS = frame.columns.get('timeS')?.values ?? [];
			expect(timeS).toHaveLength(grid.timeS.length);
			grid.timeS.forEach((value, i) => {
				if (Number.isNaN(value)) expect(timeS[i]).toBeNaN();
				else expect(Math.abs(timeS[i] - value)).toBeLessThan(0.6e-6);
			});
			const speedKmh = frame.columns.get('speedKmh')?.values ?? [];
			grid.speedKmh.forEach((value, i) => {
				if (!Number.isNaN(value)) expect(Math.abs(speedKmh[i] - value)).toBeLessThan(0.0051);
			});
		}
	});

	it('gives only the stretch and the channels that are asked for, and nothing to a browser that holds them', async () => {
		const path = `/api/v1/laps/${run.bestLap?.id}/trace?channels=timeS,brakePct&from=100&to=200&encoding=packed`;
		const response = await testRequest(path, { jar });
		const frame = decodeTraceFrame(await response.arrayBuffer());
		expect([...frame.columns.keys()]).toEqual(['timeS', 'brakePct']);
		expect(frame.fromM).toBe(100);
		expect(frame.columns.get('timeS')?.values).toHaveLength(101);
		const etag = response.headers.get('etag') ?? '';
		const again = await testRequest(path, { jar, headers: { 'if-none-match': etag } });
		expect(again.status).toBe(304);
		expect((await testRequest(`${path}x`, { jar })).status).toBe(400);
	});

	it('compares two of its laps like the core, with a ledger that sums to the gap within a microsecond', async () => {
		const clean = run.laps.filter((lap) => lap.clean);
		const [driver, reference] = [clean[1], clean[0]];
		const response = await testRequest(`/api/v1/compare/${driver.id}/${reference.id}`, { jar });
		const compared: ComparisonDocument = await response.json();
		const { comparison } = compared;
		expect(Math.abs(comparison.ledger.reduce((sum, row) => sum + row.totalS, 0) - comparison.deltaS)).toBeLessThan(
			1e-6
		);
		expect(comparison.deltaS).toBeCloseTo(driver.timeS - reference.timeS, 6);
		const { compared: expected } = core();
		expect(comparison.findings.map(({ corner, code }) => ({ corner, code }))).toEqual(
			expected?.findings.map(({ corner, code }) => ({ corner, code }))
		);
		comparison.ledger.forEach((row, i) =>
			expect(Math.abs(row.totalS - (expected?.ledger[i].totalS ?? NaN))).toBeLessThan(5e-6)
		);
		const etag = response.headers.get('etag') ?? '';
		expect(
			(await testRequest(`/api/v1/compare/${driver.id}/${reference.id}`, { jar, headers: { 'if-none-match': etag } }))
				.status
		).toBe(304);
	});

	it('is recognised on the layout of an earlier one, and laps of both can be laid on each other', async () => {
		const second = await importFile(jar, 'later.csv.gz', await fixture('closed-form/marrow_fen_noise_60hz.csv.gz'));
		expect(second.runs[0].layout.id).toBe(run.layout.id);
		expect(second.runs[0].layoutKnown).toBe(true);
		const later: RunView = await (await testRequest(`/api/v1/runs/${second.runs[0].id}`, { jar })).json();
		expect(later.references.map(({ id }) => id)).toContain(run.bestLap?.id);
		expect((await testRequest(`/api/v1/compare/${later.bestLap?.id}/${run.bestLap?.id}`, { jar })).status).toBe(200);
	});

	it('keeps the ids of its laps when it is read again, and takes the place of the first reading', async () => {
		const mapping = { columns: [] };
		const body = JSON.stringify({ mapping });
		const response = await testRequest(`/api/v1/uploads/${imported.id}/mapping`, { method: 'PUT', body, jar });
		expect(response.status).toBe(202);
		await workThrough();
		const after: RunView = await (await testRequest(`/api/v1/runs/${run.id}`, { jar })).json();
		expect(after.laps.map(({ id }) => id)).toEqual(run.laps.map(({ id }) => id));
		expect(after.layout.id).toBe(run.layout.id);
		expect(after.corners.map(({ id }) => id)).toEqual(run.corners.map(({ id }) => id));
		const [{ total }] = await database()('analyses')
			.join('runs', 'runs.id', 'analyses.run_id')
			.where({ owner_id: person.id })
			.count({ total: '*' });
		expect(total).toBe(2);
	});
});

describe('a refused file', () => {
	it.each([
		{ name: 'nothing.csv', bytes: new Uint8Array(), code: 'empty_file' },
		{
			name: 'picture.png',
			bytes: Uint8Array.of(0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a, 0, 0, 0, 13),
			code: 'not_text'
		},
		{
			name: 'broken.csv.gz',
			bytes: Uint8Array.from(gzipSync('time,speed\n'.repeat(5000)).subarray(0, 60)),
			code: 'compressed_file'
		},
		{ name: 'words.csv', bytes: Uint8Array.from(Buffer.from('a,b,c\nx,y,z\n')), code: null }
	])('$name keeps its bytes and its reason, and leaves nothing else', async ({ name, bytes: content, code }) => {
		const owner = await makePerson('Jonas Velde');
		const ownJar = await signedIn(owner);
		const view = await importFile(ownJar, name, content);
		expect(view.state).toBe('refused');
		if (code) expect(view.error?.code).toBe(code);
		expect(view.error?.remedy).toBeTruthy();
		expect(view.runs).toEqual([]);
		const file = await testRequest(`/api/v1/uploads/${view.id}/file`, { jar: ownJar });
		expect(Buffer.from(await file.arrayBuffer()).equals(content)).toBe(true);
		const db = database();
		expect(await db('runs').where({ owner_id: owner.id })).toEqual([]);
		expect(await db('circuits').where({ created_by: owner.id })).toEqual([]);
	});
});

describe('the door for uploads', () => {
	it('stops a file that is too large while it comes in, and keeps nothing of it', async () => {
		const limit = environment().KERBNOTE_UPLOAD_LIMIT_BYTES;
		Object.assign(environment(), { KERBNOTE_UPLOAD_LIMIT_BYTES: 1000 });
		try {
			const owner = await makePerson();
			const response = await testRequest('/api/v1/uploads?name=big.csv', {
				method: 'PUT',
				body: new Uint8Array(5000),
				jar: await signedIn(owner)
			});
			expect(response.status).toBe(413);
			expect(response.headers.get('content-type')).toBe('application/problem+json');
			expect(await response.json()).toMatchObject({ code: 'file_too_large', status: 413 });
			expect(await database()('uploads').where({ owner_id: owner.id })).toEqual([]);
		} finally {
			Object.assign(environment(), { KERBNOTE_UPLOAD_LIMIT_BYTES: limit });
		}
	});

	it('keeps nothing of a file whose sender goes away in the middle', async () => {
		const owner = await makePerson();
		const body = new ReadableStream({
			pull(controller) {
				controller.enqueue(new TextEncoder().encode('time,speed\n1,2\n'));
				controller.error(Object.assign(new Error('aborted'), { code: 'ECONNRESET' }));
			}
		});
		const response = await testRequest('/api/v1/uploads?name=cut.csv', {
			method: 'PUT',
			body,
			jar: await signedIn(owner)
		});
		expect(response.status).toBe(400);
		expect(await response.json()).toMatchObject({ code: 'upload_interrupted' });
		expect(await database()('uploads').where({ owner_id: owner.id })).toEqual([]);
	});

	it('takes only the last part of a name, without what steers a terminal', async () => {
		const ownJar = await signedIn(await makePerson());
		const { id } = await upload(ownJar, '../../etc/\u001b[31mpass\u202ewd.csv', new Uint8Array([1]));
		expect((await getUpload(ownJar, id)).fileName).toBe('[31mpasswd.csv');
		await workThrough();
	});

	it('refuses a page of another site', async () => {
		const ownJar = await signedIn(await makePerson());
		for (const origin of ['https://elsewhere.example', null]) {
			const response = await testRequest('/api/v1/uploads?name=a.csv', {
				method: 'PUT',
				body: new Uint8Array([1]),
				jar: ownJar,
				origin
			});
			expect(response.status).toBe(403);
		}
	});
});

describe('an import that is stopped between two steps', () => {
	/** A pool whose thread does not get through. */
	const breaking = (error: Error) => ({ run: () => Promise.reject(error) });

	it('is tried again and stores exactly one run', async () => {
		const owner = await makePerson();
		const ownJar = await signedIn(owner);
		const { id } = await upload(ownJar, 'again.csv.gz', bytes);
		const db = database();
		// The worker dies after it has claimed the job: the row says running, nobody beats.
		await db('jobs')
			.where({ status: 'waiting', kind: 'importRun' })
			.update({
				status: 'running',
				attempts: 1,
				claimed_by: 'dead',
				heartbeat_at: db.raw('CURRENT_TIMESTAMP(3) - INTERVAL 1 HOUR')
			});
		await workThrough();
		expect(await getUpload(ownJar, id)).toMatchObject({ state: 'analysed' });
		expect(await db('runs').where({ owner_id: owner.id })).toHaveLength(1);
	});

	it('that breaks every time says so, keeps the file, and stores nothing', async () => {
		const owner = await makePerson();
		const ownJar = await signedIn(owner);
		const { id } = await upload(ownJar, 'broken.csv.gz', bytes);
		const db = database();
		await db('jobs').where({ status: 'waiting', kind: 'importRun' }).update({ max_attempts: 1 });
		await workThrough(breaking(new Error('the thread fell over')));
		expect(await getUpload(ownJar, id)).toMatchObject({ state: 'refused', error: { code: 'internal' }, runs: [] });
		expect(await db('runs').where({ owner_id: owner.id })).toEqual([]);
		const path = environment().KERBNOTE_STORAGE + `/${id.slice(-2)}/${id}`;
		expect((await readFile(path)).equals(bytes)).toBe(true);
	});
});
