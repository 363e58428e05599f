import { hostname } from 'node:os';
import type { Knex } from 'knex';
import { faultOf, logger } from '../logger.ts';
import type { AnalysisPool } from '../importing/analysisPool.ts';
import { sendMail } from '../mail/sendMail.ts';
import { giveUpImport, importRun } from '../services/importRun.ts';
import { giveUpRecut, recutLayout } from '../services/recutLayout.ts';
import { writeReset } from '../services/resetByMail.ts';
import type { RawStore } from '../storage/rawStore.ts';
import { jobPayloadSchemas } from './jobKinds.ts';
import {
	beat,
	claim,
	enqueue,
	fail,
	finish,
	HEARTBEAT_MS,
	JobLost,
	reap,
	release,
	type ClaimedJob
} from './jobQueue.ts';
import { queueOlderReadings } from './reanalyse.ts';
import { sweep } from './sweep.ts';

export interface RunnerOptions {
	db: Knex;
	store: RawStore;
	pool: Pick<AnalysisPool, 'run'>;
	/** jobs at a time */
	slots: number;
	/** how long to wait when nothing is due; a person waits for the first number behind this */
	pollMs?: number;
}

const POLL_MS = 200;
const REAP_MS = 4_000;
const SWEEP_EVERY_S = 600;
/** Pause between two handfuls of files that a better analysis reads again. */
const REANALYSE_EVERY_S = 5;
const LONGEST_FAULT_PAUSE_MS = 5_000;

/**
 * Works through the queue: claims jobs, says that it lives, returns lost ones, and stops when told to. Any number of runners
 * on any number of machines share one queue.
 */
export class JobRunner {
	readonly #options: RunnerOptions;
	readonly #worker = `${hostname().slice(0, 40)}:${process.pid}:${Math.random().toString(36).slice(2, 8)}`;
	readonly #running = new Map<ClaimedJob, AbortController>();
	#stopping = false;
	#loops: Promise<unknown>[] = [];
	#wake = new AbortController();

	constructor(options: RunnerOptions) {
		this.#options = options;
	}

	async start(): Promise<void> {
		await enqueue(this.#options.db, 'sweep', {}, { uniqueKey: 'sweep' });
		await enqueue(this.#options.db, 'reanalyse', {}, { uniqueKey: 'reanalyse' });
		this.#loops = [
			...Array.from({ length: this.#options.slots }, () =>
				this.#repeat(() => this.#workOnce(), this.#options.pollMs ?? POLL_MS)
			),
			this.#repeat(() => this.#beatAll(), HEARTBEAT_MS),
			this.#repeat(() => reap(this.#options.db).then(() => false), REAP_MS)
		];
	}

	/**
	 * Claims no more, lets running jobs end, and gives back those that do not within the time: their threads are stopped, and
	 * nothing of them was stored.
	 */
	async stop(patienceMs: number): Promise<void> {
		this.#stopping = true;
		this.#wake.abort();
		const timer = setTimeout(() => {
			for (const controller of this.#running.values()) controller.abort();
		}, patienceMs);
		await Promise.all(this.#loops);
		clearTimeout(timer);
	}

	/** Calls again at once while there was work, else after the pause; a database that is away is asked again, ever more seldom. */
	async #repeat(work: () => Promise<boolean>, pauseMs: number): Promise<void> {
		let faults = 0;
		while (!this.#stopping) {
			let again = false;
			try {
				again = await work();
				faults = 0;
			} catch (error) {
				faults++;
				if (faults === 1) logger.error(faultOf(error), 'job runner');
			}
			if (!again) await this.#pause(Math.min(LONGEST_FAULT_PAUSE_MS, pauseMs * (faults + 1)));
		}
	}

	#pause(ms: number): Promise<void> {
		return new Promise((resolve) => {
			if (this.#wake.signal.aborted) return resolve();
			const done = () => {
				clearTimeout(timer);
				this.#wake.signal.removeEventListener('abort', done);
				resolve();
			};
			const timer = setTimeout(done, ms);
			this.#wake.signal.addEventListener('abort', done, { once: true });
		});
	}

	async #beatAll(): Promise<boolean> {
		for (const [job, controller] of this.#running) {
			if (!(await beat(this.#options.db, job))) controller.abort();
		}
		return false;
	}

	async #workOnce(): Promise<boolean> {
		const job = await claim(this.#options.db, this.#worker);
		if (!job) return false;
		const controller = new AbortController();
		this.#running.set(job, controller);
		try {
			await this.#work(job, controller.signal);
		} finally {
			this.#running.delete(job);
		}
		return true;
	}

	async #work(job: ClaimedJob, signal: AbortSignal): Promise<void> {
		const { db } = this.#options;
		try {
			if (job.attempt > job.maxAttempts) throw new Error('the job took its worker with it every time');
			await this.#dispatch(job, signal);
			logger.info({ job: job.id, kind: job.kind, attempt: job.attempt }, 'job done');
		} catch (error) {
			if (error instanceof JobLost) return;
			if (signal.aborted) return await release(db, job);
			const { code, message } = faultOf(error);
			logger.error({ job: job.id, kind: job.kind, attempt: job.attempt, ...faultOf(error) }, 'job failed');
			const gaveUp = await fail(db, job, { code: String(code ?? 'fault'), message: String(message ?? '') });
			if (gaveUp && job.kind === 'importRun') await giveUpImport(db, jobPayloadSchemas.importRun.parse(job.payload));
			if (gaveUp && job.kind === 'recutLayout') await giveUpRecut(db, jobPayloadSchemas.recutLayout.parse(job.payload));
		}
	}

	async #dispatch(job: ClaimedJob, signal: AbortSignal): Promise<void> {
		const { db, store } = this.#options;
		if (job.kind === 'importRun') {
			return await importRun(this.#options, job, jobPayloadSchemas.importRun.parse(job.payload), signal);
		}
		if (job.kind === 'recutLayout') {
			return await recutLayout(this.#options, job, jobPayloadSchemas.recutLayout.parse(job.payload), signal);
		}
		if (job.kind === 'reanalyse') {
			const queued = await queueOlderReadings(db);
			await finish(db, job);
			if (queued > 0) await enqueue(db, 'reanalyse', {}, { uniqueKey: 'reanalyse', delayS: REANALYSE_EVERY_S });
			return;
		}
		if (job.kind === 'sendMail') return await sendMail(db, job, jobPayloadSchemas.sendMail.parse(job.payload));
		if (job.kind === 'writeReset') return await writeReset(db, job, jobPayloadSchemas.writeReset.parse(job.payload));
		await sweep(db, store, new Date());
		await finish(db, job);
		await enqueue(db, 'sweep', {}, { uniqueKey: 'sweep', delayS: SWEEP_EVERY_S });
	}
}
