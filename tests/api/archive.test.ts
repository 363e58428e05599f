import '../helpers/server.ts';
import { randomBytes } from 'node:crypto';
import { readdir, rm } from 'node:fs/promises';
import { join } from 'node:path';
import { gunzipSync, gzipSync } from 'node:zlib';
import { afterAll, describe, expect, it } from 'vitest';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { environment } from '../../src/lib/server/environment.ts';
import type { UploadView } from '../../src/lib/schemas/views.ts';
import { makePerson, signedIn } from '../helpers/factories.ts';
import { closeImporting, fixture, getUpload, importFile, upload, workThrough } from '../helpers/importing.ts';
import { testRequest } from '../helpers/testRequest.ts';
import { zipOf, type ZipEntry } from '../helpers/zip.ts';

const db = database();
afterAll(async () => {
	await closeImporting();
	await closeDatabase();
	await rm(environment().KERBNOTE_STORAGE, { recursive: true, force: true });
});

const text = (content: string) => Uint8Array.from(Buffer.from(content));
const table = (id: string) => text(`nothing,in,${id}\nx,y,z\n`);

async function handOver(bytes: Uint8Array, name = 'day.zip') {
	const owner = await makePerson();
	const jar = await signedIn(owner);
	const view = await importFile(jar, name, Uint8Array.from(bytes));
	return { owner, jar, view };
}

/** Raw files that lie in the store for the rows of a person, and those rows. */
async function leftOf(ownerId: number) {
	const rows = await db('uploads').where({ owner_id: ownerId }).select<{ storage_key: string }[]>('storage_key');
	const root = environment().KERBNOTE_STORAGE;
	const keys: string[] = [];
	for (const folder of await readdir(root)) {
		for (const file of await readdir(join(root, folder))) keys.push(`${folder}/${file}`);
	}
	return { rows: rows.length, files: rows.filter(({ storage_key }) => keys.includes(storage_key)).length };
}

describe('a zip', () => {
	it('becomes an upload of each table in it, and stays as it was handed over', async () => {
		const run = Uint8Array.from(gunzipSync(await fixture('closed-form/marrow_fen_noise_60hz.csv.gz')));
		const bytes = zipOf([
			{ name: 'saturday/run 1.csv', content: run },
			{ name: 'saturday/notes.pdf', content: text('%PDF') },
			{ name: '__MACOSX/saturday/._run 1.csv', content: text('x') },
			{ name: 'sunday/words.txt', content: table('words') },
			{ name: 'sunday/run 1 again.csv', content: run }
		]);
		const { jar, view, owner } = await handOver(bytes);
		expect(view).toMatchObject({ kind: 'archive', state: 'analysed', runs: [], error: null });
		expect(view.files.map(({ name, knownBefore }) => [name, knownBefore])).toEqual([
			['run 1.csv', false],
			['notes.pdf', false],
			['words.txt', false],
			['run 1 again.csv', true]
		]);
		const [first, picture, words, again] = view.files.map((file) => file.upload);
		expect(picture).toBeNull();
		expect([first?.state, words?.state]).toEqual(['analysed', 'refused']);
		expect(again?.id).toBe(first?.id);
		const child: UploadView = await getUpload(jar, first?.id ?? '');
		expect(child).toMatchObject({ archive: { id: view.id, fileName: 'day.zip' }, kind: 'file' });
		expect(child.runs).toHaveLength(1);
		for (const [id, content] of [
			[view.id, bytes],
			[first?.id, run]
		] as const) {
			const file = await testRequest(`/api/v1/uploads/${id}/file`, { jar });
			expect(Buffer.from(await file.arrayBuffer()).equals(content)).toBe(true);
		}
		expect(await db('uploads').where({ owner_id: owner.id, state: 'receiving' })).toEqual([]);
	}, 120_000);

	it('that was unpacked half when its worker died is unpacked once', async () => {
		const owner = await makePerson();
		const jar = await signedIn(owner);
		const entries = [1, 2, 3].map((i) => ({ name: `${i}.csv`, content: table(String(i)) }));
		const { id } = await upload(jar, 'half.zip', Uint8Array.from(zipOf(entries)));
		await workThrough();
		const before = await getUpload(jar, id);
		// As a worker leaves it that dies just before its transaction.
		await db('uploads')
			.where({ owner_id: owner.id })
			.whereNotNull('parent_id')
			.update({ state: 'receiving', content_key: null });
		await testRequest(`/api/v1/uploads/${id}`, { jar });
		const row = await db('uploads').where({ owner_id: owner.id }).whereNull('parent_id').first();
		await db('uploads').where({ id: row.id }).update({ kind: 'file', state: 'stored', archive_files: null });
		await db('jobs').insert({
			kind: 'importRun',
			unique_key: `importRun:${row.id}:1`,
			payload: JSON.stringify({ uploadId: row.id, revision: 1 })
		});
		await workThrough();
		const after = await getUpload(jar, id);
		expect(after.files.map(({ upload: file }) => file?.id)).toEqual(before.files.map(({ upload: file }) => file?.id));
		expect(await leftOf(owner.id)).toEqual({ rows: 4, files: 4 });
	});

	const zeros = new Uint8Array(80 << 20);
	it.each<{ name: string; make: () => ZipEntry[]; code: string; says: RegExp }>([
		{
			name: 'locked with a password',
			make: () => [
				{ name: 'a.csv', content: table('a') },
				{ name: 'b.csv', content: table('b'), encrypted: true }
			],
			code: 'compressed_file',
			says: /password/
		},
		{
			name: 'with a name that leads out of it',
			make: () => [{ name: '../../etc/passwd.csv', content: table('a') }],
			code: 'compressed_file',
			says: /outside itself/
		},
		{
			name: 'with an absolute name',
			make: () => [{ name: '/etc/passwd.csv', content: table('a') }],
			code: 'compressed_file',
			says: /outside itself/
		},
		{
			name: 'with a zip in it',
			make: () => [
				{ name: 'a.csv', content: table('a') },
				{ name: 'more.zip', content: zipOf([{ name: 'b.csv', content: table('b') }]) }
			],
			code: 'compressed_file',
			says: /another archive/
		},
		{
			name: 'with a zip in it that is called a table',
			make: () => [
				{ name: 'a.csv', content: table('a') },
				{ name: 'b.csv', content: zipOf([{ name: 'b.csv', content: table('b') }]) }
			],
			code: 'compressed_file',
			says: /another archive/
		},
		{
			name: 'that is a bomb',
			make: () => [
				{ name: 'a.csv', content: table('a') },
				{ name: 'b.csv', content: zeros }
			],
			code: 'compressed_file',
			says: /times its size/
		},
		{
			name: 'that lies about a size',
			make: () => [{ name: 'b.csv', content: zeros.subarray(0, 1 << 20), claimedBytes: 100 }],
			code: 'compressed_file',
			says: /cannot be unpacked/
		},
		{
			name: 'with too many files',
			make: () => Array.from({ length: 501 }, (_, i) => ({ name: `${i}.csv`, content: table(String(i)) })),
			code: 'compressed_file',
			says: /more than 500/
		},
		{
			name: 'with no table',
			make: () => [{ name: 'a.png', content: text('x') }],
			code: 'no_data_rows',
			says: /no table/
		},
		{ name: 'with nothing', make: () => [], code: 'no_data_rows', says: /no table/ },
		{
			name: 'that is a workbook',
			make: () => [
				{ name: '[Content_Types].xml', content: text('<Types/>') },
				{ name: 'xl/workbook.xml', content: text('<workbook/>') }
			],
			code: 'not_csv',
			says: /workbook/
		}
	])('$name is refused with a reason, kept, and leaves nothing else', async ({ make, code, says }) => {
		const bytes = zipOf(make());
		const { view, owner, jar } = await handOver(bytes);
		expect(view).toMatchObject({ state: 'refused', error: { code } });
		expect(view.error?.message).toMatch(says);
		expect(view.error?.remedy).toBeTruthy();
		expect(await leftOf(owner.id)).toEqual({ rows: 1, files: 1 });
		const file = await testRequest(`/api/v1/uploads/${view.id}/file`, { jar });
		expect(Buffer.from(await file.arrayBuffer()).equals(bytes)).toBe(true);
	});

	it('that is cut off is refused', async () => {
		const whole = zipOf([{ name: 'a.csv', content: Uint8Array.from(randomBytes(5000)) }]);
		const { view } = await handOver(whole.subarray(0, whole.length - 40));
		expect(view).toMatchObject({ state: 'refused', error: { code: 'compressed_file' } });
	});
});

describe('gzip', () => {
	it('that is a bomb is refused before it has filled anything', async () => {
		const rows = Buffer.alloc(80 << 20, '1,1\n');
		const { view } = await handOver(gzipSync(Buffer.concat([text('time [s],speed [km/h]\n'), rows])), 'bomb.csv.gz');
		expect(view).toMatchObject({ state: 'refused', error: { code: 'compressed_file' } });
		expect(view.error?.message).toMatch(/times its size/);
	});
});
