import './server.ts';
import { readFile } from 'node:fs/promises';
import { resolve } from 'node:path';
import type { UploadHead, UploadView } from '../../src/lib/schemas/views.ts';
import { database } from '../../src/lib/server/db/database.ts';
import { AnalysisPool } from '../../src/lib/server/importing/analysisPool.ts';
import { JobRunner } from '../../src/lib/server/jobs/jobRunner.ts';
import { rawStore } from '../../src/lib/server/storage/store.ts';
import type { CookieJar } from './cookieJar.ts';
import { testRequest } from './testRequest.ts';

let shared: AnalysisPool | undefined;

/** The thread that reads and analyses, started once for a test file; `closeImporting` ends it. */
export function analysisPool(): AnalysisPool {
	return (shared ??= new AnalysisPool(1));
}

export async function closeImporting(): Promise<void> {
	await shared?.close();
	shared = undefined;
}

/** Bytes of a file in `fixtures/`. */
export async function fixture(path: string): Promise<Uint8Array<ArrayBuffer>> {
	return Uint8Array.from(await readFile(resolve('fixtures', path)));
}

/** Hands a file over as the browser does. */
export async function upload(jar: CookieJar, name: string, bytes: Uint8Array<ArrayBuffer>): Promise<UploadHead> {
	const response = await testRequest(`/api/v1/uploads?name=${encodeURIComponent(name)}`, {
		method: 'PUT',
		body: bytes,
		jar,
		headers: { 'content-type': 'text/csv' }
	});
	if (response.status !== 202)
		throw new Error(`an upload requires 202, got ${response.status}: ${await response.text()}`);
	return await response.json();
}

/** Works through the queue until nothing waits or runs. */
export async function workThrough(pool: Pick<AnalysisPool, 'run'> = analysisPool()): Promise<void> {
	const db = database();
	const runner = new JobRunner({ db, store: rawStore(), pool, slots: 1, pollMs: 20 });
	await runner.start();
	const open = () => db('jobs').where({ kind: 'importRun' }).whereIn('status', ['waiting', 'running']).first('id');
	while (await open()) await new Promise((done) => setTimeout(done, 20));
	await runner.stop(10_000);
}

/** Hands a file over, waits for its import, and says what came of it. */
export async function importFile(jar: CookieJar, name: string, bytes: Uint8Array<ArrayBuffer>): Promise<UploadView> {
	const { id } = await upload(jar, name, bytes);
	await workThrough();
	return await getUpload(jar, id);
}

export async function getUpload(jar: CookieJar, id: string): Promise<UploadView> {
	return await (await testRequest(`/api/v1/uploads/${id}`, { jar })).json();
}
