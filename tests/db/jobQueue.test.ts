import '../helpers/server.ts';
import { afterAll, beforeEach, describe, expect, it } from 'vitest';
import { closeDatabase, database } from '../../src/lib/server/db/database.ts';
import { retryOnDeadlock } from '../../src/lib/server/db/retryOnDeadlock.ts';
import {
	beat,
	claim,
	enqueue,
	fail,
	finish,
	HEARTBEAT_MS,
	holdJob,
	JobLost,
	LOST_AFTER_MS,
	reap,
	release,
	type ClaimedJob
} from '../../src/lib/server/jobs/jobQueue.ts';

const db = database();
beforeEach(() => db('jobs').delete());
afterAll(closeDatabase);

const payload = { uploadId: 1, revision: 1 };

async function claimed(worker = 'a'): Promise<ClaimedJob> {
	const job = await claim(db, worker);
	if (!job) throw new Error('the test requires a job to claim');
	return job;
}

describe('the job queue', () => {
	it('gives each job to one worker, however many ask at once', async () => {
		for (let i = 0; i < 12; i++) await enqueue(db, 'importRun', { uploadId: i, revision: 1 });
		const taken = await Promise.all(Array.from({ length: 20 }, (_, i) => claim(db, `worker ${i % 4}`)));
		const ids = taken.flatMap((job) => job?.id ?? []);
		expect(ids).toHaveLength(12);
		expect(new Set(ids).size).toBe(12);
	});

	it('gives what is due first, and nothing before its time', async () => {
		await enqueue(db, 'importRun', { uploadId: 2, revision: 1 }, { delayS: 3600 });
		await enqueue(db, 'importRun', { uploadId: 1, revision: 1 });
		expect((await claimed()).payload).toEqual({ uploadId: 1, revision: 1 });
		expect(await claim(db, 'a')).toBeUndefined();
	});

	it('holds a key while the job waits or runs, and frees it at the end', async () => {
		expect(await enqueue(db, 'importRun', payload, { uniqueKey: 'k' })).toBe(true);
		expect(await enqueue(db, 'importRun', payload, { uniqueKey: 'k' })).toBe(false);
		const job = await claimed();
		expect(await enqueue(db, 'importRun', payload, { uniqueKey: 'k' })).toBe(false);
		await finish(db, job);
		expect(await enqueue(db, 'importRun', payload, { uniqueKey: 'k' })).toBe(true);
	});

	it('tries again after longer and longer pauses, then gives up and says why', async () => {
		await enqueue(db, 'importRun', payload, { maxAttempts: 3 });
		const pauses: number[] = [];
		for (let attempt = 1; attempt <= 3; attempt++) {
			await db('jobs').update({ run_at: db.raw('CURRENT_TIMESTAMP(3)') });
			const job = await claimed();
			expect(job.attempt).toBe(attempt);
			expect(await fail(db, job, { code: 'fault', message: 'it broke' })).toBe(attempt === 3);
			const row = await db('jobs').first(db.raw('TIMESTAMPDIFF(SECOND, CURRENT_TIMESTAMP(3), run_at) AS pause'));
			pauses.push(Number(row.pause));
		}
		expect(pauses[1]).toBeGreaterThan(pauses[0]);
		expect(await db('jobs').first()).toMatchObject({
			status: 'failed',
			error_code: 'fault',
			error_message: 'it broke'
		});
		expect(await claim(db, 'a')).toBeUndefined();
	});

	it('returns the job of a worker that went silent, and refuses what that worker would still store', async () => {
		await enqueue(db, 'importRun', payload);
		const lost = await claimed('gone');
		await db('jobs').update({ heartbeat_at: db.raw('CURRENT_TIMESTAMP(3) - INTERVAL 1 HOUR') });
		expect(await reap(db)).toBe(1);
		const taken = await claimed('alive');
		expect(taken).toMatchObject({ id: lost.id, attempt: 2 });
		expect(await beat(db, lost)).toBe(false);
		await expect(retryOnDeadlock(db, (trx) => holdJob(trx, lost))).rejects.toBeInstanceOf(JobLost);
		await finish(db, lost);
		expect(await db('jobs').first()).toMatchObject({ status: 'running', claimed_by: 'alive' });
	});

	it('leaves a job alone whose worker says that it lives', async () => {
		await enqueue(db, 'importRun', payload);
		const job = await claimed();
		expect(await beat(db, job)).toBe(true);
		expect(await reap(db)).toBe(0);
		expect(LOST_AFTER_MS).toBeGreaterThanOrEqual(4 * HEARTBEAT_MS);
	});

	it('takes a job back untouched from a worker that is told to stop', async () => {
		await enqueue(db, 'importRun', payload);
		await release(db, await claimed());
		expect((await claimed()).attempt).toBe(1);
	});
});

describe('retryOnDeadlock', () => {
	it('runs again what lost against another, until both are through', async () => {
		await enqueue(db, 'importRun', { uploadId: 1, revision: 1 });
		await enqueue(db, 'importRun', { uploadId: 2, revision: 1 });
		const [first, second] = (await db('jobs').orderBy('id').select('id')).map(({ id }) => id);
		let starts = 0;
		const cross = (a: number, b: number) =>
			retryOnDeadlock(db, async (trx) => {
				starts++;
				await trx('jobs').where({ id: a }).increment('max_attempts', 1);
				await new Promise((resolve) => setTimeout(resolve, 80));
				await trx('jobs').where({ id: b }).increment('max_attempts', 1);
			});
		await Promise.all([cross(first, second), cross(second, first)]);
		expect(starts).toBeGreaterThan(2);
		expect(await db('jobs').orderBy('id').select('max_attempts')).toEqual([{ max_attempts: 6 }, { max_attempts: 6 }]);
	});

	it('does not repeat what is no deadlock', async () => {
		let starts = 0;
		const broken = retryOnDeadlock(db, async () => {
			starts++;
			throw new Error('broken for good');
		});
		await expect(broken).rejects.toThrow('broken for good');
		expect(starts).toBe(1);
	});
});
