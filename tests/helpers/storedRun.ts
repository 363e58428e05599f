import './server.ts';
import { randomBytes } from 'node:crypto';
import { gunzipSync } from 'node:zlib';
import type { Knex } from 'knex';
import { database } from '../../src/lib/server/db/database.ts';
import { encodePublicId, newPublicId } from '../../src/lib/server/db/publicId.ts';
import { analyseFile } from '../../src/lib/server/importing/analyseFile.ts';
import type { AnalysedRun, LayoutCandidate } from '../../src/lib/server/importing/importMessages.ts';
import { CODE_VERSION, storeRun } from '../../src/lib/server/importing/storeRun.ts';
import { rawStore, storageKeyOf } from '../../src/lib/server/storage/store.ts';
import type { TestPerson } from './factories.ts';
import { fixture } from './importing.ts';

export const RUN_FIXTURE = 'closed-form/marrow_fen_session_60hz.csv.gz';

let analysed: Promise<AnalysedRun> | undefined;

/** The fixture's run, analysed once for a test file. */
export function analysedFixture(candidates: LayoutCandidate[] = []): Promise<AnalysedRun> {
	const analyse = async () => {
		const bytes = gunzipSync(await fixture(RUN_FIXTURE));
		const [run] = await analyseFile(one(bytes), {
			fileName: 'session.csv',
			mapping: null,
			sizeBytes: bytes.length,
			progress: () => {},
			brake: async () => null,
			candidates: async () => candidates
		});
		return run;
	};
	return (analysed ??= analyse());
}

async function* one(bytes: Uint8Array): AsyncIterable<Uint8Array> {
	yield bytes;
}

export interface StoredRun {
	uploadId: number;
	uploadPublicId: string;
	runId: number;
	runPublicId: string;
	layoutId: number;
	layoutPublicId: string;
	circuitId: number;
	cornerPublicId: string;
	/** clean laps, in driving order */
	lapPublicIds: string[];
	lapIds: number[];
}

/**
 * Puts the fixture's run into a person's notebook, with its upload and raw file, without a thread.
 *
 * @param on layout of an earlier stored run; a new one when absent
 */
export async function storedRun(owner: TestPerson, on?: StoredRun): Promise<StoredRun> {
	const db = database();
	const publicId = newPublicId();
	const uploadPublicId = encodePublicId(publicId);
	const bytes = randomBytes(64);
	await rawStore().write(storageKeyOf(uploadPublicId), one(bytes), 1000);
	const [uploadId]: number[] = await db('uploads').insert({
		public_id: publicId,
		owner_id: owner.id,
		uploaded_by: owner.id,
		file_name: `${owner.name}.csv`,
		size_bytes: bytes.length,
		storage_key: storageKeyOf(uploadPublicId),
		state: 'analysed',
		stage: 'done',
		progress: 1,
		analysed_with: CODE_VERSION
	});
	const run = await analysedFixture();
	const known = on && { known: { layoutId: on.layoutId, pathVersion: 1, mapVersion: 1 } };
	const place = { uploadId, ownerId: owner.id, runIndex: 1, storedAt: new Date(), mapping: null };
	await db.transaction((trx) => storeRun(trx, place, known ? { ...run, layout: known } : run));
	return { uploadId, uploadPublicId, ...(await keysOf(db, uploadId)) };
}

async function keysOf(db: Knex, uploadId: number): Promise<Omit<StoredRun, 'uploadId' | 'uploadPublicId'>> {
	const run = await db('runs').join('layouts', 'layouts.id', 'runs.layout_id').where({ upload_id: uploadId }).first({
		runId: 'runs.id',
		runPublicId: 'runs.public_id',
		layoutId: 'layouts.id',
		layoutPublicId: 'layouts.public_id',
		circuitId: 'layouts.circuit_id'
	});
	const laps: { id: number; public_id: Buffer }[] = await db('laps')
		.where({ run_id: run.runId, is_clean: true })
		.orderBy('ordinal')
		.select('id', 'public_id');
	const corner = await db('corners').where({ layout_id: run.layoutId }).orderBy('id').first('public_id');
	return {
		runId: run.runId,
		runPublicId: encodePublicId(run.runPublicId),
		layoutId: run.layoutId,
		layoutPublicId: encodePublicId(run.layoutPublicId),
		circuitId: run.circuitId,
		cornerPublicId: encodePublicId(corner.public_id),
		lapIds: laps.map(({ id }) => id),
		lapPublicIds: laps.map(({ public_id }) => encodePublicId(public_id))
	};
}
