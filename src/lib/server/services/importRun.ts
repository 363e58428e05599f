import type { Knex } from 'knex';
import { z } from 'zod';
import type { ErrorDocument } from '../../schemas/analysisDocument.ts';
import { columnMappingSchema, type ColumnMapping } from '../../schemas/columnMapping.ts';
import type { UploadStage } from '../../schemas/views.ts';
import { findViewerOfPerson } from '../access/findViewer.ts';
import type { Viewer } from '../access/viewer.ts';
import { carNameOf, findCar } from '../db/carRepository.ts';
import type { LayoutVersion } from '../db/layoutRepository.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import type { AnalysisPool, ImportListener } from '../importing/analysisPool.ts';
import { isArchive } from '../importing/archive/readArchive.ts';
import { findCandidates, findChosenLayout } from '../importing/findCandidates.ts';
import { checkStillNew, LayoutAppeared, lockLayouts, makesLayouts } from '../importing/newLayouts.ts';
import { CODE_VERSION, storeRun } from '../importing/storeRun.ts';
import { finish, holdJob, type ClaimedJob } from '../jobs/jobQueue.ts';
import type { JobPayload } from '../jobs/jobKinds.ts';
import { FileMissing, withLocalFile, type RawStore } from '../storage/rawStore.ts';
import { headerKey } from '../upload/headerKey.ts';
import { findRemembered, hasRemembered } from '../upload/rememberedMappings.ts';
import { unpackUpload } from './unpackUpload.ts';
import type { ImportAnswer } from '../../../workers/importRun.ts';

export interface ImportTools {
	db: Knex;
	store: RawStore;
	pool: Pick<AnalysisPool, 'run'>;
}

const uploadSchema = z.object({
	id: z.number(),
	public_id: z.instanceof(Buffer),
	owner_id: z.number(),
	uploaded_by: z.number().nullable(),
	parent_id: z.number().nullable(),
	file_name: z.string(),
	size_bytes: z.number(),
	storage_key: z.string(),
	revision: z.number(),
	mapping: columnMappingSchema.nullable(),
	created_at: z.date()
});
export type ImportedUpload = z.infer<typeof uploadSchema>;

/** How often a file is read again because another file made its layout meanwhile. */
const MOST_READINGS = 4;

/**
 * Reads, analyses and stores one upload: raw file → thread → one transaction that holds the job and the upload. A refused file
 * leaves its reason and nothing else (runs of an earlier reading stay), and so does one about which a person must be asked; a job
 * that was taken away, and one for an older reading, store nothing. A zip becomes an upload of each file in it.
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
	const { db, store } = tools;
	const upload = await findUpload(db, payload);
	if (!upload) return await finish(db, job);
	const isAsked = payload.cause !== 'version';
	const settle = settleOf(db, job, upload);
	try {
		await withLocalFile(store, upload.storage_key, async (path) => {
			if (await isArchive(path)) return await unpackUpload(db, store, upload, path, settle);
			for (let reading = 1; ; reading++) {
				try {
					return await readOnce(tools, job, upload, { path, isAsked, signal });
				} catch (error) {
					if (!(error instanceof LayoutAppeared) || reading === MOST_READINGS) throw error;
				}
			}
		});
	} catch (error) {
		// Nobody asked for this reading, and a file that is gone does not come back by another try.
		if (isAsked || !(error instanceof FileMissing)) throw error;
		await settle((trx) => keepAsItWas(trx, upload));
	}
}

async function readOnce(
	{ db, pool }: ImportTools,
	job: ClaimedJob,
	upload: ImportedUpload,
	how: { path: string; isAsked: boolean; signal: AbortSignal }
): Promise<void> {
	const owner = await findViewerOfPerson(db, upload.owner_id);
	const offered = new Set<number>();
	const request = {
		path: how.path,
		sizeBytes: upload.size_bytes,
		fileName: upload.file_name,
		mapping: upload.mapping,
		looksForMapping: owner !== null && (await hasRemembered(db, owner))
	};
	const answer = await pool.run(request, listenerOf(db, upload, owner, offered), how.signal);
	const settle = settleOf(db, job, upload);
	if ('refusal' in answer) {
		const refusal = answer.refusal;
		return await settle((trx) => (how.isAsked ? storeRefusal(trx, upload, answer, refusal) : keepAsItWas(trx, upload)));
	}
	const { runs } = answer;
	const isNew = makesLayouts(runs);
	await settle(
		async (trx) => {
			if (isNew && owner) await checkStillNew(trx, owner, upload.id, runs, offered);
			await storeRuns(trx, upload, answer, runs, !how.isAsked);
		},
		isNew ? lockLayouts : undefined
	);
}

async function findUpload(db: Knex, { uploadId, revision }: JobPayload<'importRun'>): Promise<ImportedUpload | null> {
	const found: unknown = await db('uploads')
		.where({ id: uploadId, revision })
		.whereNull('deleted_at')
		.whereNot({ state: 'receiving' })
		.first(Object.keys(uploadSchema.shape));
	return found ? uploadSchema.parse(found) : null;
}

/** What the thread asks, answered as the upload's owner would see it. */
function listenerOf(db: Knex, upload: ImportedUpload, owner: Viewer | null, offered: Set<number>): ImportListener {
	return {
		progress: (stage, share, rowsRead) => void sayProgress(db, upload, stage, share, rowsRead),
		mapping: async (headers) => owner && ((await findRemembered(db, owner, headerKey(headers)))?.mapping ?? null),
		brake: async (metadata) => {
			const name = carNameOf(metadata);
			const car = name === null ? undefined : await findCar(db, upload.owner_id, name);
			return car?.brake_full != null && car.brake_unit ? { unit: car.brake_unit, full: car.brake_full } : null;
		},
		candidates: async (fingerprint, runIndex) => {
			if (!owner) return [];
			const chosen = await findChosenLayout(db, upload.id, runIndex);
			const candidates = chosen ? [chosen] : await findCandidates(db, owner, fingerprint, upload.id);
			for (const { layoutId } of candidates) offered.add(layoutId);
			return candidates;
		}
	};
}

/** Progress is news, not state: a line that is lost does no harm. */
async function sayProgress(
	db: Knex,
	upload: ImportedUpload,
	stage: UploadStage,
	progress: number,
	rowsRead: number
): Promise<void> {
	try {
		await db('uploads')
			.where({ id: upload.id, revision: upload.revision })
			.whereIn('state', ['stored', 'reading'])
			.update({ state: 'reading', stage, progress, rows_read: rowsRead });
	} catch {
		// The next line, or the end, says more.
	}
}

/** Stores the end of an import. */
export type Settle = (
	store: (trx: Knex.Transaction) => Promise<void>,
	begin?: (trx: Knex.Transaction) => Promise<void>
) => Promise<void>;

/** The end of an import: all of it, or nothing, and only for the reading that still counts. */
function settleOf(db: Knex, job: ClaimedJob, upload: ImportedUpload): Settle {
	return async (store, begin) => {
		await retryOnDeadlock(db, async (trx) => {
			await begin?.(trx);
			await holdJob(trx, job);
			const counts: unknown = await trx('uploads')
				.where({ id: upload.id, revision: upload.revision })
				.whereNull('deleted_at')
				.forUpdate()
				.first('id');
			if (counts) await store(trx);
			await finish(trx, job);
		});
	};
}

/** What is written of a reading whatever came of it. */
function aboutReading({ headers, remembered }: Pick<ImportAnswer, 'headers' | 'remembered'>) {
	return {
		stage: 'done',
		progress: 1,
		analysed_with: CODE_VERSION,
		...(headers && { header_key: headerKey(headers) }),
		...(remembered && { mapping: JSON.stringify(remembered), remembered_mapping_used: true })
	};
}

async function storeRefusal(
	trx: Knex.Transaction,
	upload: ImportedUpload,
	answer: ImportAnswer,
	refusal: ErrorDocument['error']
): Promise<void> {
	await trx('uploads')
		.where({ id: upload.id })
		.update({
			...aboutReading(answer),
			state: refusal.code === 'needs_answer' ? 'needs_answer' : 'refused',
			understood: null,
			error: JSON.stringify(refusal)
		});
}

/** A better analysis that cannot read a file takes nothing away. */
async function keepAsItWas(trx: Knex.Transaction, upload: ImportedUpload): Promise<void> {
	await trx('uploads').where({ id: upload.id }).update({ analysed_with: CODE_VERSION });
}

async function storeRuns(
	trx: Knex.Transaction,
	upload: ImportedUpload,
	answer: ImportAnswer,
	runs: Extract<ImportAnswer, { runs: unknown }>['runs'],
	staysDeleted: boolean
): Promise<void> {
	const mapping: ColumnMapping | null = upload.mapping ?? answer.remembered;
	const earlier: LayoutVersion[] = [];
	for (const [i, run] of runs.entries()) {
		const place = {
			uploadId: upload.id,
			ownerId: upload.owner_id,
			runIndex: i + 1,
			storedAt: upload.created_at,
			mapping,
			earlier,
			staysDeleted
		};
		earlier.push(await storeRun(trx, place, run));
	}
	await trx('runs').where({ upload_id: upload.id }).where('run_index', '>', runs.length).delete();
	await trx('uploads')
		.where({ id: upload.id })
		.update({
			...aboutReading(answer),
			state: 'analysed',
			rows_read: runs.reduce((sum, run) => sum + run.document.source.rows, 0),
			error: null,
			understood: JSON.stringify(runs[0].document.source)
		});
}

/** After the last try: the raw file stays, the person reads that it is our fault. */
export async function giveUpImport(db: Knex, payload: JobPayload<'importRun'>): Promise<void> {
	if (payload.cause === 'version') {
		await db('uploads').where({ id: payload.uploadId }).update({ analysed_with: CODE_VERSION });
		return;
	}
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
