import { DEMO_PEOPLE } from '../../seeds/demoPeople.ts';
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
let working: { pool: AnalysisPool; runner: JobRunner } | undefined;

/** Begins to work only where there is something of the demo to do: where it is in already, jobs are left to the workers. */
async function startWork(): Promise<void> {
	if (working) return;
	const pool = new AnalysisPool(THREADS);
	const runner = new JobRunner({ db, store: rawStore(), pool, slots: THREADS, pollMs: LOOK_EVERY_MS });
	working = { pool, runner };
	await runner.start();
}

/** Settles when no import of the demo waits or runs. */
async function worked(): Promise<void> {
	const until = Date.now() + PATIENCE_MS;
	while (Date.now() < until) {
		const open: unknown = await db('uploads')
			.join('people', 'people.id', 'uploads.owner_id')
			.whereIn(
				'people.email',
				DEMO_PEOPLE.map(({ email }) => email)
			)
			.whereIn('uploads.state', ['stored', 'reading'])
			.whereNull('uploads.deleted_at')
			.first('uploads.id');
		if (!open) return;
		await startWork();
		await new Promise((resolve) => setTimeout(resolve, LOOK_EVERY_MS));
	}
	throw new Error(`the demo requires its files to be read within ${PATIENCE_MS / 1000} s`);
}

try {
	await seedDemo({ db, accountsPath, worked });
	console.log('demo is in');
} catch (error) {
	console.error(`seed failed: ${error instanceof Error ? error.message : String(error)}`);
	process.exitCode = 1;
} finally {
	await working?.runner.stop(1000);
	await working?.pool.close();
	await closeDatabase();
}
