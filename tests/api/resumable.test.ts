import '../helpers/server.ts';
import { createHash, randomBytes } from 'node:crypto';
import { existsSync } from 'node:fs';
import { rm, writeFile } from 'node:fs/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { decodePublicId } from '../../src/lib/server/db/publicId.ts';
import { environment } from '../../src/lib/server/environment.ts';
import { sweep } from '../../src/lib/server/jobs/sweep.ts';
import { rawStore } from '../../src/lib/server/storage/store.ts';
import { partPath, partSize } from '../../src/lib/server/upload/resumable/partStore.ts';
import { SharedLocker } from '../../src/lib/server/upload/resumable/sharedLocker.ts';
import type { CookieJar } from '../helpers/cookieJar.ts';
import { makePerson, signedIn, type TestPerson } from '../helpers/factories.ts';
import { getUpload } from '../helpers/importing.ts';
import { testRequest } from '../helpers/testRequest.ts';

const db = database();
let owner: TestPerson;
let jar: CookieJar;

beforeAll(async () => {
	owner = await makePerson();
	jar = await signedIn(owner);
});
afterAll(async () => {
	await closeDatabase();
	await rm(environment().KERBNOTE_STORAGE, { recursive: true, force: true });
});

const TUS = { 'tus-resumable': '1.0.0' };
const rowOf = (id: string) =>
	db('uploads')
		.where({ public_id: decodePublicId(id) })
		.first();

async function create(sizeBytes: number, name = 'stint.csv', asked = jar): Promise<Response> {
	const metadata = `filename ${Buffer.from(name).toString('base64')}`;
	const headers = { ...TUS, 'upload-length': String(sizeBytes), 'upload-metadata': metadata };
	return await testRequest('/api/v1/uploads/resumable', { method: 'POST', headers, jar: asked });
}

async function created(sizeBytes: number, name?: string): Promise<string> {
	const response = await create(sizeBytes, name);
	expect(response.status).toBe(201);
	const location = response.headers.get('location') ?? '';
	expect(location).toMatch(/^\/api\/v1\/uploads\/resumable\/[0-9a-z]{26}$/);
	return location.slice(-26);
}

async function send(id: string, offset: number, body: BodyInit | null, asked = jar): Promise<Response> {
	return await testRequest(`/api/v1/uploads/resumable/${id}`, {
		method: 'PATCH',
		headers: { ...TUS, 'upload-offset': String(offset), 'content-type': 'application/offset+octet-stream' },
		body,
		jar: asked
	});
}

async function ask(id: string): Promise<Response> {
	return await testRequest(`/api/v1/uploads/resumable/${id}`, { method: 'HEAD', headers: TUS, jar });
}

describe('a file in pieces', () => {
	it('is an upload from its first request on, and after its last piece is stored with one job', async () => {
		const bytes = randomBytes(90_000);
		const id = await created(bytes.length, '../../etc/stint 1.csv');
		expect(await getUpload(jar, id)).toMatchObject({ state: 'receiving', fileName: 'stint 1.csv', receivedBytes: 0 });
		expect((await send(id, 0, bytes.subarray(0, 40_000))).headers.get('upload-offset')).toBe('40000');
		const head = await ask(id);
		expect([head.headers.get('upload-offset'), head.headers.get('upload-length')]).toEqual(['40000', '90000']);
		const last = await send(id, 40_000, bytes.subarray(40_000));
		expect(last.status).toBe(204);
		expect(last.headers.get('kerbnote-upload')).toBe(id);
		expect(await rowOf(id)).toMatchObject({
			state: 'stored',
			size_bytes: bytes.length,
			sha256: createHash('sha256').update(bytes).digest()
		});
		expect(existsSync(partPath(id))).toBe(false);
		const file = await testRequest(`/api/v1/uploads/${id}/file`, { jar });
		expect(Buffer.from(await file.arrayBuffer()).equals(bytes)).toBe(true);
		const row = await rowOf(id);
		expect(await db('jobs').where('unique_key', `importRun:${row.id}:1`)).toHaveLength(1);
	});

	it('keeps what came in before the connection broke, and goes on from there', async () => {
		const bytes = randomBytes(50_000);
		const id = await created(bytes.length);
		let sent = false;
		const breaking = new ReadableStream({
			pull(controller) {
				if (sent) return controller.error(new Error('the connection is gone'));
				sent = true;
				controller.enqueue(new Uint8Array(bytes.subarray(0, 20_000)));
			}
		});
		expect((await send(id, 0, breaking)).status).toBeGreaterThanOrEqual(400);
		const offset = Number((await ask(id)).headers.get('upload-offset'));
		expect(offset).toBe(await partSize(id));
		expect((await send(id, offset, bytes.subarray(offset))).status).toBe(204);
		expect((await rowOf(id)).sha256).toEqual(createHash('sha256').update(bytes).digest());
	});

	it('refuses a piece for another place, and keeps what it has', async () => {
		const id = await created(10);
		await send(id, 0, 'abc');
		const response = await send(id, 7, 'def');
		expect(response.status).toBe(409);
		expect(await response.json()).toMatchObject({ code: 'conflict' });
		expect((await ask(id)).headers.get('upload-offset')).toBe('3');
	});

	it('is finished by the next question when the node died after the last piece', async () => {
		const id = await created(6);
		await send(id, 0, 'abc');
		await writeFile(partPath(id), 'abcdef');
		const head = await ask(id);
		expect(head.headers.get('upload-offset')).toBe('6');
		expect(head.headers.get('kerbnote-upload')).toBe(id);
		expect(await rowOf(id)).toMatchObject({ state: 'stored' });
		expect((await ask(id)).headers.get('upload-offset')).toBe('6');
	});

	it('is given up on request, and nothing is left', async () => {
		const id = await created(10);
		await send(id, 0, 'abc');
		const path = `/api/v1/uploads/resumable/${id}`;
		expect((await testRequest(path, { method: 'DELETE', headers: TUS, jar })).status).toBe(204);
		expect(await rowOf(id)).toBeUndefined();
		expect(existsSync(partPath(id))).toBe(false);
		expect((await ask(id)).status).toBe(404);
	});

	it('over the limit is refused before a byte comes in', async () => {
		const response = await create(environment().KERBNOTE_UPLOAD_LIMIT_BYTES + 1);
		expect(response.status).toBe(413);
		expect(await response.json()).toMatchObject({ code: 'file_too_large' });
	});

	it('belongs to whoever began it', async () => {
		const id = await created(10);
		const other = await signedIn(await makePerson('Jonas Velde'));
		expect((await send(id, 0, 'abc', other)).status).toBe(404);
		expect(await partSize(id)).toBe(0);
	});
});

describe('the sweep', () => {
	const aged = (id: string, hours: number) =>
		db('uploads')
			.where({ public_id: decodePublicId(id) })
			.update({ updated_at: db.raw('CURRENT_TIMESTAMP(3) - INTERVAL ? HOUR', [hours]) });

	it('finishes what is whole, gives up what nobody goes on with, and leaves the rest', async () => {
		const [whole, abandoned, resting] = [await created(3), await created(9), await created(9)];
		await writeFile(partPath(whole), randomBytes(3));
		await send(abandoned, 0, 'abc');
		await send(resting, 0, 'abc');
		await aged(whole, 1);
		await aged(abandoned, 100);
		await aged(resting, 20);
		await sweep(db, rawStore(), new Date());
		expect(await rowOf(whole)).toMatchObject({ state: 'stored' });
		expect(await rowOf(abandoned)).toBeUndefined();
		expect(existsSync(partPath(abandoned))).toBe(false);
		expect((await ask(resting)).headers.get('upload-offset')).toBe('3');
	});
});

describe('the same file twice', () => {
	it('is recognised, in one piece and in several, and is there once', async () => {
		const bytes = randomBytes(5000);
		const put = (name: string) =>
			testRequest(`/api/v1/uploads?name=${name}`, { method: 'PUT', body: new Uint8Array(bytes), jar });
		const first = await put('a.csv');
		expect(first.status).toBe(202);
		const { id } = await first.json();
		const second = await put('b.csv');
		expect([second.status, second.headers.get('kerbnote-same-file')]).toEqual([200, 'true']);
		expect(await second.json()).toMatchObject({ id, fileName: 'a.csv' });
		const pieces = await created(bytes.length);
		const last = await send(pieces, 0, bytes);
		expect(last.headers.get('kerbnote-upload')).toBe(id);
		expect((await getUpload(jar, pieces)).id).toBe(id);
		expect((await ask(pieces)).headers.get('kerbnote-upload')).toBe(id);
		const sha256 = createHash('sha256').update(bytes).digest();
		const rows = await db('uploads').where({ owner_id: owner.id, sha256 }).whereNull('deleted_at');
		expect(rows).toHaveLength(1);
		const others = await db('uploads').where({ owner_id: owner.id, sha256 }).whereNotNull('same_as_id');
		for (const { storage_key } of others) expect(await rawStore().has(storage_key)).toBe(false);
	});

	it('is there once when ten come at the same moment', async () => {
		const bytes = randomBytes(3000);
		const answers = await Promise.all(
			Array.from({ length: 10 }, async (_, i) => {
				const body = new Uint8Array(bytes);
				const response = await testRequest(`/api/v1/uploads?name=${i}.csv`, { method: 'PUT', body, jar });
				return { status: response.status, ...(await response.json()) };
			})
		);
		expect(new Set(answers.map(({ id }) => id)).size).toBe(1);
		expect(answers.map(({ status }) => status).sort()).toEqual([...Array(9).fill(200), 202]);
		const row = await rowOf(answers[0].id);
		expect(await db('jobs').where('unique_key', `importRun:${row.id}:1`)).toHaveLength(1);
	});

	it('of another person is another file', async () => {
		const body = new Uint8Array(randomBytes(100));
		const other = await signedIn(await makePerson('Jonas Velde'));
		const statuses = [];
		for (const asked of [jar, other]) {
			statuses.push((await testRequest('/api/v1/uploads?name=a.csv', { method: 'PUT', body, jar: asked })).status);
		}
		expect(statuses).toEqual([202, 202]);
	});
});

describe('an upload that is deleted', () => {
	it('is out of sight, comes back as it was, and makes room for the same file meanwhile', async () => {
		const body = new Uint8Array(randomBytes(200));
		const put = async () => await testRequest('/api/v1/uploads?name=a.csv', { method: 'PUT', body, jar });
		const { id } = await (await put()).json();
		const path = `/api/v1/uploads/${id}`;
		const restore = () => testRequest(`${path}/restore`, { method: 'POST', jar });
		expect((await testRequest(path, { method: 'DELETE', jar })).status).toBe(204);
		expect((await testRequest(path, { jar })).status).toBe(404);
		const row = await rowOf(id);
		expect(
			await db('jobs').where({ kind: 'importRun', status: 'waiting', unique_key: `importRun:${row.id}:1` })
		).toEqual([]);
		expect(await (await restore()).json()).toMatchObject({ id, state: 'stored' });
		expect(await db('jobs').where('unique_key', `importRun:${row.id}:1`)).toHaveLength(1);
		await testRequest(path, { method: 'DELETE', jar });
		expect((await put()).status).toBe(202);
		const conflicting = await restore();
		expect([conflicting.status, (await conflicting.json()).code]).toEqual([409, 'conflict']);
	});

	it('while it comes in is given up, whole or not, and does not stand in the way of the same file', async () => {
		const bytes = randomBytes(300);
		const id = await created(bytes.length);
		await testRequest(`/api/v1/uploads/${id}`, { method: 'DELETE', jar });
		await writeFile(partPath(id), bytes);
		await db('uploads')
			.where({ public_id: decodePublicId(id) })
			.update({ updated_at: db.raw('CURRENT_TIMESTAMP(3) - INTERVAL 1 HOUR') });
		await sweep(db, rawStore(), new Date());
		expect(await rowOf(id)).toBeUndefined();
		expect(existsSync(partPath(id))).toBe(false);
		const body = new Uint8Array(bytes);
		expect((await testRequest('/api/v1/uploads?name=a.csv', { method: 'PUT', body, jar })).status).toBe(202);
	});

	it('goes for good after thirty days, row and file', async () => {
		const body = new Uint8Array(randomBytes(200));
		const { id } = await (await testRequest('/api/v1/uploads?name=a.csv', { method: 'PUT', body, jar })).json();
		await testRequest(`/api/v1/uploads/${id}`, { method: 'DELETE', jar });
		const { storage_key } = await rowOf(id);
		const deletedDaysAgo = (days: number) =>
			db('uploads')
				.where({ public_id: decodePublicId(id) })
				.update({ deleted_at: db.raw('CURRENT_TIMESTAMP(3) - INTERVAL ? DAY', [days]) });
		await deletedDaysAgo(29);
		await sweep(db, rawStore(), new Date());
		expect(await rawStore().has(storage_key)).toBe(true);
		await deletedDaysAgo(31);
		await sweep(db, rawStore(), new Date());
		expect(await rawStore().has(storage_key)).toBe(false);
		expect(await rowOf(id)).toBeUndefined();
	});
});

describe('the lock of an upload', () => {
	const nodes = [new SharedLocker(db), new SharedLocker(db)];
	const never = new AbortController().signal;

	it('is held by one node, which is asked to let go when another waits', async () => {
		const [mine, theirs] = nodes.map((node) => node.newLock('held'));
		await mine.lock(never, () => void mine.unlock());
		const startMs = Date.now();
		await theirs.lock(never, () => {});
		expect(Date.now() - startMs).toBeGreaterThan(200);
		await mine.unlock();
		expect(await db('locks').where({ name: 'upload:held' })).toHaveLength(1);
		await theirs.unlock();
		expect(await db('locks').where({ name: 'upload:held' })).toEqual([]);
	});

	it('of a node that was killed runs out', async () => {
		await db('locks').insert({
			name: 'upload:dead',
			holder: 'a node that is gone',
			expires_at: db.raw('CURRENT_TIMESTAMP(3) + INTERVAL 500000 MICROSECOND')
		});
		const lock = nodes[0].newLock('dead');
		await lock.lock(never, () => {});
		expect(await db('locks').where({ name: 'upload:dead' })).toMatchObject([{ release_asked: 0 }]);
		await lock.unlock();
	});

	it('lets in one of many that come at once', async () => {
		let inside = 0;
		let most = 0;
		await Promise.all(
			Array.from({ length: 6 }, async (_, i) => {
				const lock = nodes[i % 2].newLock('many');
				await lock.lock(never, () => {});
				most = Math.max(most, ++inside);
				await new Promise((resolve) => setTimeout(resolve, 20));
				inside--;
				await lock.unlock();
			})
		);
		expect(most).toBe(1);
	});
});

describe('the stream of events', () => {
	/** Reads events until one fits, or the stream ends. */
	async function readUntil(reader: ReadableStreamDefaultReader<Uint8Array>, fits: (text: string) => boolean) {
		let text = '';
		while (!fits(text)) {
			const { done, value } = await reader.read();
			if (done) return text;
			text += new TextDecoder().decode(value);
		}
		return text;
	}

	it('tells of open uploads first, then of every change of the viewer’s own, and ends with the sign-in', async () => {
		const person = await makePerson('Tomas Ruud');
		const ownJar = await signedIn(person);
		const put = async (asked: CookieJar) => {
			const body = new Uint8Array(randomBytes(50));
			const response = await testRequest('/api/v1/uploads?name=a.csv', { method: 'PUT', body, jar: asked });
			const { id } = await response.json();
			return String(id);
		};
		const before = await put(ownJar);
		const response = await testRequest('/api/v1/events', { jar: ownJar });
		expect(response.headers.get('content-type')).toBe('text/event-stream');
		const reader = response.body?.getReader();
		if (!reader) throw new Error('the stream requires a body');
		expect(await readUntil(reader, (text) => text.includes(before))).toContain('event: upload');
		const foreign = await put(jar);
		const after = await put(ownJar);
		const told = await readUntil(reader, (text) => text.includes(after));
		expect(told).not.toContain(foreign);
		await testRequest(`/api/v1/uploads/${after}`, { method: 'DELETE', jar: ownJar });
		expect(await readUntil(reader, (text) => text.includes('event: gone'))).toContain(after);
		await db('sign_in_sessions').where({ person_id: person.id }).update({ revoked_at: new Date() });
		expect(await readUntil(reader, () => false)).toContain('event: end');
	});
});
