import { seedDemo } from '../../seeds/seedDemo.ts';
import { closeDatabase, database } from '../lib/server/db/database.ts';
import { environment } from '../lib/server/environment.ts';
import { AnalysisPool } from '../lib/server/importing/analysisPool.ts';
import { JobRunner } from '../lib/server/jobs/jobRunner.ts';
import { rawStore } from '../lib/server/storage/store.ts';

/** `seed`: puts the demo in; its files go through the queue, worked on here, so that it does not wait for a worker. */

const accountsPath = process.env.KERBNOTE_DEMO_ACCOUNTS;
if (!accountsPath) {
	console.error('seed requires KERBNOTE_DEMO_ACCOUNTS, the file that the accounts are written to');
	process.exit(2);
}
const THREADS = 2;
const LOOK_EVERY_MS = 100;
/** Far more than eight files take; beyond it something hangs. */
const PATIENCE_MS = 240_000;

const db = database();
environment();
const pool = new AnalysisPool(THREADS);
const runner = new JobRunner({ db, store: rawStore(), pool, slots: THREADS, pollMs: LOOK_EVERY_MS });

/** Settles when no import waits or runs. */
async function worked(): Promise<void> {
	const until = Date.now() + PATIENCE_MS;
	while (Date.now() < until) {
		const open: unknown = await db('uploads')
			.whereIn('state', ['stored', 'reading'])
			.whereNull('deleted_at')
			.first('id');
		if (!open) return;
		await new Promise((resolve) => setTimeout(resolve, LOOK_EVERY_MS));
	}
	throw new Error(`the demo requires its files to be read within ${PATIENCE_MS / 1000} s`);
}

try {
	await runner.start();
	await seedDemo({ db, accountsPath, worked });
	console.log('demo is in');
} catch (error) {
	console.error(`seed failed: ${error instanceof Error ? error.message : String(error)}`);
	process.exitCode = 1;
} finally {
	await runner.stop(1000);
	await pool.close();
	await closeDatabase();
}
