import type { Knex } from 'knex';
import { z } from 'zod';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { jobPayloadSchemas, type JobKind, type JobPayload } from './jobKinds.ts';

/** A worker says this often that it lives … */
export const HEARTBEAT_MS = 2_000;
/** … and its jobs go back after this long without a word. At least four beats, so that one slow moment loses nothing. */
export const LOST_AFTER_MS = 12_000;
/** Pause before the next try: this, then four times as long each time. */
const FIRST_PAUSE_S = 1;

/** A job that this worker holds. `attempt` fences: who lost the job to another no longer matches. */
export interface ClaimedJob {
	id: number;
	kind: JobKind;
	payload: unknown;
	attempt: number;
	maxAttempts: number;
	worker: string;
}

/**
 * Puts a job in the queue, in the transaction of what makes it necessary.
 *
 * @param options.uniqueKey while a job with this key waits or runs, another is not added
 * @returns was it added
 */
export async function enqueue<Kind extends JobKind>(
	trx: Knex | Knex.Transaction,
	kind: Kind,
	payload: JobPayload<Kind>,
	options: { uniqueKey?: string; delayS?: number; maxAttempts?: number } = {}
): Promise<boolean> {
	const [{ affectedRows }] = await trx.raw(
		`INSERT IGNORE INTO jobs (kind, unique_key, payload, max_attempts, run_at)
		VALUES (?, ?, ?, ?, CURRENT_TIMESTAMP(3) + INTERVAL ? MICROSECOND)`,
		[
			kind,
			options.uniqueKey ?? null,
			JSON.stringify(payload),
			options.maxAttempts ?? 4,
			Math.round((options.delayS ?? 0) * 1e6)
		]
	);
	return affectedRows === 1;
}

const rowSchema = z.object({
	id: z.number(),
	kind: z.enum(['importRun', 'reanalyse', 'recutLayout', 'sendMail', 'sweep', 'writeReset']),
	payload: z.unknown(),
	attempts: z.number(),
	max_attempts: z.number()
});

/**
 * Takes the next job that is due. Two workers never take the same one, and none waits for another.
 *
 * @returns undefined when nothing is due
 */
export async function claim(db: Knex, worker: string): Promise<ClaimedJob | undefined> {
	return await retryOnDeadlock(db, async (trx) => {
		const found: unknown = await trx('jobs')
			.where('status', 'waiting')
			.where('run_at', '<=', trx.raw('CURRENT_TIMESTAMP(3)'))
			.orderBy([{ column: 'run_at' }, { column: 'id' }])
			.forUpdate()
			.skipLocked()
			.first('id', 'kind', 'payload', 'attempts', 'max_attempts');
		if (!found) return undefined;
		const row = rowSchema.parse(found);
		await trx('jobs')
			.where({ id: row.id })
			.update({
				status: 'running',
				attempts: row.attempts + 1,
				claimed_by: worker,
				claimed_at: trx.raw('CURRENT_TIMESTAMP(3)'),
				heartbeat_at: trx.raw('CURRENT_TIMESTAMP(3)')
			});
		return {
			id: row.id,
			kind: row.kind,
			payload: jobPayloadSchemas[row.kind].parse(row.payload),
			attempt: row.attempts + 1,
			maxAttempts: row.max_attempts,
			worker
		};
	});
}

/** Says that the worker still works on the job; false when it was taken from it. */
export async function beat(db: Knex, job: ClaimedJob): Promise<boolean> {
	const held = await heldJob(db, job).update({ heartbeat_at: db.raw('CURRENT_TIMESTAMP(3)') });
	return held === 1;
}

/**
 * Locks the job for the transaction that stores its result, so that a job which was taken away stores nothing.
 *
 * @throws {JobLost} when another worker has it by now
 */
export async function holdJob(trx: Knex.Transaction, job: ClaimedJob): Promise<void> {
	const row: unknown = await heldJob(trx, job).forUpdate().first('id');
	if (!row) throw new JobLost(job.id);
}

/** Ends the job in the transaction that stored its result; `holdJob` has locked it. */
export async function finish(trx: Knex | Knex.Transaction, job: ClaimedJob): Promise<void> {
	await heldJob(trx, job).update({
		status: 'done',
		unique_key: null,
		finished_at: trx.raw('CURRENT_TIMESTAMP(3)'),
		error_code: null,
		error_message: null
	});
}

/**
 * Puts the job back for another try after a pause, or gives it up after the last.
 *
 * @returns true when it was given up
 */
export async function fail(db: Knex, job: ClaimedJob, fault: { code: string; message: string }): Promise<boolean> {
	const isLast = job.attempt >= job.maxAttempts;
	const pauseS = FIRST_PAUSE_S * 4 ** (job.attempt - 1);
	await heldJob(db, job).update({
		status: isLast ? 'failed' : 'waiting',
		unique_key: isLast ? null : db.ref('unique_key'),
		run_at: db.raw('CURRENT_TIMESTAMP(3) + INTERVAL ? SECOND', [pauseS]),
		claimed_by: null,
		finished_at: isLast ? db.raw('CURRENT_TIMESTAMP(3)') : null,
		error_code: fault.code.slice(0, 60),
		error_message: fault.message.slice(0, 1000)
	});
	return isLast;
}

/** Gives a job back untouched, as when the worker is told to stop; the attempt does not count. */
export async function release(db: Knex, job: ClaimedJob): Promise<void> {
	await heldJob(db, job).update({ status: 'waiting', claimed_by: null, attempts: db.raw('attempts - 1') });
}

/**
 * Takes a job that a person no longer wants out of the queue. A worker that has it finds out with its next beat, and stores
 * nothing.
 */
export async function cancel(trx: Knex | Knex.Transaction, uniqueKey: string): Promise<void> {
	await trx('jobs')
		.where({ unique_key: uniqueKey })
		.whereIn('status', ['waiting', 'running'])
		.update({ status: 'cancelled', unique_key: null, finished_at: trx.raw('CURRENT_TIMESTAMP(3)') });
}

/** Returns jobs whose worker is gone to the queue. A job that took its worker with it every time is given up by its next claim. */
export async function reap(db: Knex): Promise<number> {
	return await retryOnDeadlock(db, (trx) =>
		trx('jobs')
			.where('status', 'running')
			.where('heartbeat_at', '<', db.raw('CURRENT_TIMESTAMP(3) - INTERVAL ? MICROSECOND', [LOST_AFTER_MS * 1000]))
			.update({
				status: 'waiting',
				claimed_by: null,
				error_code: 'worker_lost',
				run_at: db.raw('CURRENT_TIMESTAMP(3)')
			})
	);
}

/** The job was reaped and belongs to another worker now. */
export class JobLost extends Error {
	constructor(id: number) {
		super(`job ${id} was taken over by another worker`);
		this.name = 'JobLost';
	}
}

function heldJob(db: Knex | Knex.Transaction, job: ClaimedJob): Knex.QueryBuilder {
	return db('jobs').where({ id: job.id, status: 'running', claimed_by: job.worker, attempts: job.attempt });
}
