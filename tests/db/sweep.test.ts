import '../helpers/server.ts';
import { mkdir, readdir, rm, utimes, writeFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { afterAll, beforeEach, describe, expect, it } from 'vitest';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { encodePublicId, newPublicId } from '../../src/lib/server/db/publicId.ts';
import { sweep } from '../../src/lib/server/jobs/sweep.ts';
import { FileMissing, FileTooLarge } from '../../src/lib/server/storage/rawStore.ts';
import { LocalRawStore } from '../../src/lib/server/storage/localRawStore.ts';
import { storageKeyOf } from '../../src/lib/server/storage/store.ts';
import { makePerson } from '../helpers/factories.ts';

const root = `var/test/sweep-${process.pid}`;
const store = new LocalRawStore(root);
const db = database();
const NOW = new Date();
const YESTERDAY = new Date(NOW.getTime() - 86_400_000);

beforeEach(() => db('jobs').delete());
afterAll(async () => {
	await closeDatabase();
	await rm(root, { recursive: true, force: true });
});

async function* chunks(...texts: string[]): AsyncIterable<Uint8Array> {
	for (const text of texts) yield new TextEncoder().encode(text);
}

/** What a process leaves that is stopped in mid-upload. */
async function unfinished(options: {
	file: 'none' | 'part' | 'whole';
	row: boolean;
	at?: Date;
}): Promise<{ id: string; key: string }> {
	const owner = await makePerson();
	const publicId = newPublicId();
	const id = encodePublicId(publicId);
	const key = storageKeyOf(id);
	const at = options.at ?? YESTERDAY;
	if (options.row) {
		await db('uploads').insert({
			public_id: publicId,
			owner_id: owner.id,
			file_name: 'run.csv',
			storage_key: key,
			state: 'receiving',
			created_at: at
		});
	}
	if (options.file !== 'none') {
		const path = join(root, key) + (options.file === 'part' ? '.part' : '');
		await mkdir(dirname(path), { recursive: true });
		await writeFile(path, 'time,speed\n');
		await utimes(path, at, at);
	}
	return { id, key };
}

const rowOf = (key: string) => db('uploads').where({ storage_key: key }).first();

async function files(): Promise<string[]> {
	const folders = await readdir(root);
	return (await Promise.all(folders.map((folder) => readdir(join(root, folder))))).flat();
}

describe('sweep', () => {
	it('goes on with a file that is whole although nobody wrote it down', async () => {
		const { key } = await unfinished({ file: 'whole', row: true });
		await sweep(db, store, NOW);
		expect(await rowOf(key)).toMatchObject({ state: 'stored', size_bytes: 11 });
		expect((await rowOf(key)).sha256).toHaveLength(32);
		expect(await db('jobs').where({ kind: 'importRun' })).toHaveLength(1);
		await sweep(db, store, NOW);
		expect(await db('jobs').where({ kind: 'importRun' })).toHaveLength(1);
	});

	it('forgets a row whose file never came, and removes what is half written', async () => {
		const { key, id } = await unfinished({ file: 'part', row: true });
		await sweep(db, store, NOW);
		expect(await rowOf(key)).toBeUndefined();
		expect(await files()).not.toContain(`${id}.part`);
	});

	it('removes a file of which no row speaks', async () => {
		const { id } = await unfinished({ file: 'whole', row: false });
		await sweep(db, store, NOW);
		expect(await files()).not.toContain(id);
	});

	it('leaves alone what may still be under way', async () => {
		const { key, id } = await unfinished({ file: 'part', row: true, at: NOW });
		const { id: stray } = await unfinished({ file: 'whole', row: false, at: NOW });
		await sweep(db, store, NOW);
		expect(await rowOf(key)).toMatchObject({ state: 'receiving' });
		expect(await files()).toEqual(expect.arrayContaining([`${id}.part`, stray]));
	});
});

describe('LocalRawStore', () => {
	it('keeps all of a file or nothing', async () => {
		const kept = await store.write('ab/whole1', chunks('time,', 'speed'), 100);
		expect(kept.sizeBytes).toBe(10);
		expect((await store.measure('ab/whole1'))?.sha256.equals(kept.sha256)).toBe(true);
		await expect(store.write('ab/large1', chunks('x'.repeat(60), 'x'.repeat(60)), 100)).rejects.toBeInstanceOf(
			FileTooLarge
		);
		const broken = async function* () {
			yield new Uint8Array([1]);
			throw new Error('the line was cut');
		};
		await expect(store.write('ab/broken1', broken(), 100)).rejects.toThrow('the line was cut');
		expect(await readdir(join(root, 'ab'))).toEqual(['whole1']);
		await expect(store.read('ab/broken1')).rejects.toBeInstanceOf(FileMissing);
	});

	it.each(['../../etc/passwd', 'ab/../../x', '/etc/passwd', 'ab/.part', 'ab'])('knows no key %s', async (key) => {
		await expect(store.write(key, chunks('x'), 10)).rejects.toBeInstanceOf(RangeError);
		expect(() => store.localPath(key)).toThrow(RangeError);
	});
});
