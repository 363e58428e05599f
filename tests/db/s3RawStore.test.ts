import { createHash, randomBytes } from 'node:crypto';
import { existsSync } from 'node:fs';
import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { FileMissing, FileTooLarge, withLocalFile } from '../../src/lib/server/storage/rawStore.ts';
import { S3RawStore } from '../../src/lib/server/storage/s3RawStore.ts';
import { FakeS3 } from '../helpers/fakeS3.ts';

const bucket = new FakeS3();
const PART = 5 << 20;
let store: S3RawStore;
let folder: string;

beforeAll(async () => {
	const endpoint = await bucket.start();
	folder = await mkdtemp(join(tmpdir(), 'kerbnote-s3-'));
	store = new S3RawStore({
		endpoint,
		bucket: 'raw',
		region: 'test',
		key: 'a key',
		secret: 'a secret',
		partBytes: PART
	});
});
beforeEach(() => {
	bucket.objects.clear();
	bucket.uploads.clear();
	bucket.log.length = 0;
	bucket.failWith = () => null;
});
afterAll(async () => {
	store.close();
	await bucket.stop();
	await rm(folder, { recursive: true, force: true });
});

const sha256 = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest();

async function* inChunks(bytes: Uint8Array, size = 700_001): AsyncIterable<Uint8Array> {
	for (let at = 0; at < bytes.length; at += size) yield bytes.subarray(at, at + size);
}

async function readAll(key: string): Promise<Buffer> {
	const chunks: Uint8Array[] = [];
	for await (const chunk of await store.read(key)) chunks.push(chunk);
	return Buffer.concat(chunks);
}

describe('a bucket', () => {
	it.each([0, 1, 100_000, PART - 1, PART, 2 * PART + 17])('gives %i bytes back as they were', async (size) => {
		const bytes = randomBytes(size);
		const kept = await store.write('ab/abcd', inChunks(bytes), 1e9);
		expect(kept).toEqual({ sizeBytes: size, sha256: sha256(bytes) });
		expect((await readAll('ab/abcd')).equals(bytes)).toBe(true);
		expect(await store.measure('ab/abcd')).toEqual(kept);
		expect(bucket.uploads.size).toBe(0);
	});

	it('keeps nothing of a file that is too large, or whose sender goes away, and forgets its parts', async () => {
		const bytes = randomBytes(2 * PART);
		await expect(store.write('ab/abcd', inChunks(bytes), PART + 1)).rejects.toThrow(FileTooLarge);
		const breaking = async function* () {
			yield bytes.subarray(0, PART);
			throw new Error('gone');
		};
		await expect(store.write('ab/abcd', breaking(), 1e9)).rejects.toThrow('gone');
		expect([bucket.objects.size, bucket.uploads.size]).toEqual([0, 0]);
	});

	it('tries again where it is busy, and says so where it stays so', async () => {
		let busy = 2;
		bucket.failWith = (method) => (method === 'PUT' && busy-- > 0 ? 503 : null);
		const bytes = randomBytes(1000);
		await store.write('ab/abcd', inChunks(bytes), 1e9);
		expect((await readAll('ab/abcd')).equals(bytes)).toBe(true);
		bucket.failWith = () => 503;
		await expect(store.write('cd/cdef', inChunks(bytes), 1e9)).rejects.toThrow();
		await expect(store.has('ab/abcd')).rejects.toThrow();
		bucket.failWith = () => null;
		expect(await store.has('cd/cdef')).toBe(false);
	}, 60_000);

	it('says what it does not have', async () => {
		expect(await store.has('ab/none')).toBe(false);
		expect(await store.measure('ab/none')).toBeNull();
		await expect(store.read('ab/none')).rejects.toThrow(FileMissing);
		await store.remove('ab/none');
	});

	it('lists what is older, page by page, and parts that never became a file', async () => {
		for (const key of ['aa/1111', 'bb/2222', 'cc/3333', 'dd/4444', 'ee/5555']) {
			await store.write(key, inChunks(randomBytes(10)), 100);
		}
		bucket.uploads.set('left', { key: 'ff/6666', at: new Date(Date.now() - 60_000), parts: new Map() });
		const list = async (before: Date) => {
			const found: string[] = [];
			for await (const { key, whole } of store.list(before)) found.push(`${key} ${whole}`);
			return found;
		};
		expect(await list(new Date(Date.now() + 60_000))).toEqual([
			'aa/1111 true',
			'bb/2222 true',
			'cc/3333 true',
			'dd/4444 true',
			'ee/5555 true',
			'ff/6666 false'
		]);
		expect(await list(new Date(Date.now() - 30_000))).toEqual(['ff/6666 false']);
		await store.removePart('ff/6666');
		expect(bucket.uploads.size).toBe(0);
	});

	it('takes a file of this machine over, and lends a copy that is gone afterwards', async () => {
		const bytes = randomBytes(PART + 100);
		const path = join(folder, 'part');
		await writeFile(path, bytes);
		expect(await store.adopt('ab/abcd', path)).toEqual({ sizeBytes: bytes.length, sha256: sha256(bytes) });
		expect(existsSync(path)).toBe(false);
		let lent = '';
		const read = await withLocalFile(store, 'ab/abcd', async (copy) => {
			lent = copy;
			return await readFile(copy);
		});
		expect(read.equals(bytes)).toBe(true);
		expect(existsSync(lent)).toBe(false);
	});
});
