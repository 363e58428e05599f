import type { Knex } from 'knex';
import { z } from 'zod';
import { columnMappingSchema } from '../../schemas/columnMapping.ts';
import type { UploadStage } from '../../schemas/views.ts';
import { findViewerOfPerson } from '../access/findViewer.ts';
import { carNameOf, findCar } from '../db/carRepository.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import type { AnalysisPool, ImportListener } from '../importing/analysisPool.ts';
import { findCandidates } from '../importing/findCandidates.ts';
import type { AnalysedRun } from '../importing/importMessages.ts';
import { storeRun } from '../importing/storeRun.ts';
import { finish, holdJob, type ClaimedJob } from '../jobs/jobQueue.ts';
import type { JobPayload } from '../jobs/jobKinds.ts';
import { FileMissing, type RawStore } from '../storage/rawStore.ts';

export interface ImportTools {
	db: Knex;
	store: RawStore;
	pool: Pick<AnalysisPool, 'run'>;
}

const uploadSchema = z.object({
	id: z.number(),
	owner_id: z.number(),
	file_name: z.string(),
	size_bytes: z.number(),
	storage_key: z.string(),
	revision: z.number(),
	mapping: columnMappingSchema.nullable(),
	created_at: z.date()
});
type Upload = z.infer<typeof uploadSchema>;

/**
 * Reads, analyses and stores one upload: raw file → thread → one transaction that holds the job and the upload. A refused file
 * leaves its reason and nothing else (runs of an earlier reading stay); a job that was taken away, and one for an older reading,
 * store nothing.
 *
 * @param signal ends the thread; nothing was stored yet
 * @throws what is not the file's fault, for another try
 */
export async function importRun(
	tools: ImportTools,
	job: ClaimedJob,
	payload: JobPayload<'importRun'>,
	signal: AbortSignal
): Promise<void> {
	const { db, store, pool } = tools;
	const upload = await findUpload(db, payload);
	if (!upload) return await finish(db, job);
	const path = store.localPath(upload.storage_key);
	if (path === null || !(await store.has(upload.storage_key))) throw new FileMissing(upload.storage_key);
	const answer = await pool.run(
		{ path, sizeBytes: upload.size_bytes, fileName: upload.file_name, mapping: upload.mapping },
		await listenerOf(db, upload),
		signal
	);
	if ('refusal' in answer) {
		await settle(db, job, upload, async (trx) => {
			await trx('uploads')
				.where({ id: upload.id })
				.update({
					state: 'refused',
					stage: 'done',
					progress: 1,
					understood: null,
					error: JSON.stringify(answer.refusal)
				});
		});
	} else {
		await settle(db, job, upload, (trx) => storeRuns(trx, upload, answer.runs));
	}
}

async function findUpload(db: Knex, { uploadId, revision }: JobPayload<'importRun'>): Promise<Upload | null> {
	const found: unknown = await db('uploads')
		.where({ id: uploadId, revision })
		.whereNull('deleted_at')
		.whereNot({ state: 'receiving' })
		.first(Object.keys(uploadSchema.shape));
	return found ? uploadSchema.parse(found) : null;
}

/** What the thread asks, answered as the upload's owner would see it. */
async function listenerOf(db: Knex, upload: Upload): Promise<ImportListener> {
	const owner = await findViewerOfPerson(db, upload.owner_id);
	return {
		progress: (stage, share) => void sayProgress(db, upload, stage, share),
		brake: async (metadata) => {
			const name = carNameOf(metadata);
			const car = name === null ? undefined : await findCar(db, upload.owner_id, name);
			return car?.brake_full != null && car.brake_unit ? { unit: car.brake_unit, full: car.brake_full } : null;
		},
		candidates: async (fingerprint) => (owner ? await findCandidates(db, owner, fingerprint, upload.id) : [])
	};
}

/** Progress is news, not state: a line that is lost does no harm. */
async function sayProgress(db: Knex, upload: Upload, stage: UploadStage, share: number): Promise<void> {
	try {
		await db('uploads')
			.where({ id: upload.id, revision: upload.revision })
			.whereIn('state', ['stored', 'reading'])
			.update({ state: 'reading', stage, progress: share });
	} catch {
		// The next line, or the end, says more.
	}
}

/** The end of an import: all of it, or nothing, and only for the reading that still counts. */
async function settle(
	db: Knex,
	job: ClaimedJob,
	upload: Upload,
	store: (trx: Knex.Transaction) => Promise<void>
): Promise<void> {
	await retryOnDeadlock(db, async (trx) => {
		await holdJob(trx, job);
		const counts: unknown = await trx('uploads')
			.where({ id: upload.id, revision: upload.revision })
			.whereNull('deleted_at')
			.forUpdate()
			.first('id');
		if (counts) await store(trx);
		await finish(trx, job);
	});
}

async function storeRuns(trx: Knex.Transaction, upload: Upload, runs: readonly AnalysedRun[]): Promise<void> {
	for (const [i, run] of runs.entries()) {
		const place = {
			uploadId: upload.id,
			ownerId: upload.owner_id,
			runIndex: i + 1,
			storedAt: upload.created_at,
			mapping: upload.mapping
		};
		await storeRun(trx, place, run);
	}
	await trx('runs').where({ upload_id: upload.id }).where('run_index', '>', runs.length).delete();
	await trx('uploads')
		.where({ id: upload.id })
		.update({
			state: 'analysed',
			stage: 'done',
			progress: 1,
			error: null,
			understood: JSON.stringify(runs[0].document.source)
		});
}

/** After the last try: the raw file stays, the person reads that it is our fault. */
export async function giveUpImport(db: Knex, payload: JobPayload<'importRun'>): Promise<void> {
	await db('uploads')
		.where({ id: payload.uploadId, revision: payload.revision })
		.whereIn('state', ['stored', 'reading'])
		.update({
			state: 'refused',
			stage: 'done',
			error: JSON.stringify({
				code: 'internal',
				message: 'the import broke on our side',
				row: null,
				column: null,
				remedy: 'The file is kept; analyse it again later, or tell us its name'
			})
		});
}
