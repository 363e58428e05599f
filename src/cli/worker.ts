import { AnalysisPool } from '../lib/server/importing/analysisPool.ts';
import { closeDatabase, database } from '../lib/server/db/database.ts';
import { environment } from '../lib/server/environment.ts';
import { JobRunner } from '../lib/server/jobs/jobRunner.ts';
import { faultOf, logger } from '../lib/server/logger.ts';
import { rawStore } from '../lib/server/storage/store.ts';

/** `worker`: a process that works through the queue until it is told to stop. */

/** Time for a running job to end by itself; after that it goes back to the queue. */
const PATIENCE_MS = 5_000;

try {
	const threads = environment().KERBNOTE_WORKER_THREADS;
	const pool = new AnalysisPool(threads);
	const runner = new JobRunner({ db: database(), store: rawStore(), pool, slots: threads });
	await runner.start();
	logger.info({ threads }, 'worker runs');
	await new Promise((resolve) => {
		process.once('SIGTERM', resolve);
		process.once('SIGINT', resolve);
	});
	logger.info('worker stops');
	await runner.stop(PATIENCE_MS);
	await pool.close();
} catch (error) {
	logger.fatal(faultOf(error), 'worker cannot run');
	console.error(error instanceof Error ? error.message : String(error));
	process.exitCode = 1;
} finally {
	await closeDatabase();
}
