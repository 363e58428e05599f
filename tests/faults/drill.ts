import { spawn, type ChildProcess } from 'node:child_process';
import { mkdtempSync, readFileSync } from 'node:fs';
import { readdir, rm } from 'node:fs/promises';
import { createServer, type AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import knex, { type Knex } from 'knex';
import { Upload } from 'tus-js-client';
import { z } from 'zod';
import { startMariadb } from '../../src/cli/setup/mariadb.mjs';
import { databaseConfig } from '../../src/lib/server/db/database.ts';
import { migrateToLatest } from '../../src/lib/server/db/migrateToLatest.ts';
import { newPublicId } from '../../src/lib/server/db/publicId.ts';

export type Victim = 'server' | 'worker' | 'mariadb';

const PATIENCE_MS = 180_000;
/** Many requests for one file, so that a kill can come between any two and within any. */
const PIECE_BYTES = 128 << 10;

/**
 * The product's processes, each on its own: MariaDB as people's data have it, a server that takes pieces, a worker. Any of them
 * can be killed like a machine that loses power, and started again.
 */
export class Drill {
	readonly #folder = mkdtempSync(join(tmpdir(), 'kerbnote-drill-'));
	#url = '';
	#port = 0;
	#db: Knex | undefined;
	#server: ChildProcess | undefined;
	#worker: ChildProcess | undefined;
	#stopMariadb = async () => {};
	personId = 0;

	async start(): Promise<void> {
		await this.#startMariadb();
		await migrateToLatest(this.db);
		[this.personId] = await this.db('people').insert({
			public_id: newPublicId(),
			email: 'drill@example.org',
			name: 'Mira Tansley',
			password_hash: 'x'
		});
		this.#port = await freePort();
		await Promise.all([this.#startServer(), this.#startWorker()]);
	}

	/** Ends everything and leaves nothing. */
	async stop(): Promise<void> {
		await this.#db?.destroy();
		await Promise.all([end(this.#server), end(this.#worker)]);
		await this.#stopMariadb();
		await rm(this.#folder, { recursive: true, force: true });
	}

	get db(): Knex {
		return (this.#db ??= knex(databaseConfig(this.#url, 4)));
	}

	get storage(): string {
		return join(this.#folder, 'storage');
	}

	/** `kill -9`, and a start again. */
	async kill(victim: Victim): Promise<void> {
		if (victim === 'server') {
			await end(this.#server);
			await this.#startServer();
		} else if (victim === 'worker') {
			await end(this.#worker);
			await this.#startWorker();
		} else {
			await this.#db?.destroy();
			this.#db = undefined;
			process.kill(this.#mariadbPid(), 'SIGKILL');
			const before = this.#url;
			await this.#startMariadb();
			if (this.#url === before) return;
			await Promise.all([end(this.#server), end(this.#worker)]);
			await Promise.all([this.#startServer(), this.#startWorker()]);
		}
	}

	/** Hands a file over in pieces; goes on by itself after every break, as a browser does. */
	handOver(name: string, bytes: Buffer): Promise<void> {
		return new Promise((done, fail) => {
			const upload = new Upload(bytes, {
				endpoint: `http://127.0.0.1:${this.#port}/api/v1/uploads/resumable`,
				chunkSize: PIECE_BYTES,
				retryDelays: Array.from({ length: 400 }, () => 250),
				metadata: { filename: name },
				onShouldRetry: () => true,
				onSuccess: () => done(),
				onError: fail
			});
			upload.start();
		});
	}

	/**
	 * Waits until nothing is to be done any more. A request that was answered by nobody may have left the beginning of an upload that
	 * the client has begun anew: four days pass for these, and the worker sweeps.
	 */
	async settled(): Promise<void> {
		await this.#none(['stored', 'reading']);
		await this.db('uploads')
			.where({ state: 'receiving' })
			.update({ updated_at: this.db.raw('CURRENT_TIMESTAMP(3) - INTERVAL 4 DAY') });
		await this.db('jobs')
			.where({ kind: 'sweep', status: 'waiting' })
			.update({ run_at: this.db.raw('CURRENT_TIMESTAMP(3)') });
		await this.#none(['receiving']);
	}

	async #none(states: readonly string[]): Promise<void> {
		const until = Date.now() + PATIENCE_MS;
		for (;;) {
			const open = await this.db('uploads')
				.whereIn('state', states)
				.whereNull('deleted_at')
				.select('file_name', 'state', 'stage')
				.catch((error: unknown) => [String(error)]);
			if (open.length === 0) return;
			if (Date.now() > until) throw new Error(`the drill requires everything to end, left: ${JSON.stringify(open)}`);
			await sleep(250);
		}
	}

	/** Everything there is, to be counted. */
	async count() {
		const { db } = this;
		const [{ runs }] = await db('runs').count({ runs: '*' });
		const [{ analyses }] = await db('analyses').count({ analyses: '*' });
		const [{ layouts }] = await db('layouts').count({ layouts: '*' });
		const [{ circuits }] = await db('circuits').count({ circuits: '*' });
		const [{ lapsWithoutAnalysis }] = await db('laps')
			.leftJoin('analyses', 'analyses.id', 'laps.analysis_id')
			.whereNull('analyses.id')
			.count({ lapsWithoutAnalysis: '*' });
		// A row that only says which upload has the bytes is no upload.
		const uploads = await db('uploads')
			.whereNull('same_as_id')
			.select<{ state: string; storage_key: string }[]>('state', 'storage_key');
		const files: string[] = [];
		const parts: string[] = [];
		for (const folder of await readdir(this.storage)) {
			const names = await readdir(join(this.storage, folder));
			if (folder === 'resumable') parts.push(...names);
			else files.push(...names.map((name) => `${folder}/${name}`));
		}
		return {
			states: uploads.map(({ state }) => state),
			runs: Number(runs),
			analyses: Number(analyses),
			layouts: Number(layouts),
			circuits: Number(circuits),
			lapsWithoutAnalysis: Number(lapsWithoutAnalysis),
			filesWithoutRow: files.filter((file) => !uploads.some(({ storage_key }) => storage_key === file)),
			rowsWithoutFile: uploads.filter(({ storage_key }) => !files.includes(storage_key)).length,
			parts
		};
	}

	async #startMariadb(): Promise<void> {
		const mariadb = await startMariadb({
			root: this.#folder,
			folder: join(this.#folder, 'mariadb'),
			programs: resolve('var/programs'),
			portFile: join(this.#folder, 'ports.json'),
			durable: true,
			say: () => {}
		});
		this.#url = mariadb.url;
		this.#stopMariadb = mariadb.stop;
	}

	#mariadbPid(): number {
		const state: unknown = JSON.parse(readFileSync(join(this.#folder, 'mariadb', 'server.json'), 'utf8'));
		return z.object({ pid: z.number() }).parse(state).pid;
	}

	async #startServer(): Promise<void> {
		this.#server = this.#spawn('tests/faults/serverProcess.ts', [String(this.#port), String(this.personId)]);
		const server = this.#server;
		await new Promise<void>((ready, fail) => {
			server.stdout?.once('data', () => ready());
			server.once('exit', () => fail(new Error('the server of the drill did not start')));
		});
	}

	async #startWorker(): Promise<void> {
		this.#worker = this.#spawn('src/cli/worker.ts', []);
		this.#worker.stdout?.resume();
	}

	#spawn(script: string, args: string[]): ChildProcess {
		return spawn(process.execPath, ['--import', 'tsx', script, ...args], {
			env: {
				...process.env,
				DATABASE_URL: this.#url,
				AUTH_SECRET: 'a secret for tests, of more than 32 characters',
				KERBNOTE_STORAGE: this.storage,
				KERBNOTE_LOG_LEVEL: 'fatal'
			},
			stdio: ['ignore', 'pipe', process.env.KERBNOTE_DRILL_LOG ? 'inherit' : 'ignore']
		});
	}
}

/** `kill -9` of one process that the drill started, waited for. */
async function end(child: ChildProcess | undefined): Promise<void> {
	if (!child || child.exitCode !== null || child.signalCode !== null) return;
	const gone = new Promise((resolve) => child.once('exit', resolve));
	child.kill('SIGKILL');
	await gone;
}

async function freePort(): Promise<number> {
	const probe = createServer();
	await new Promise<void>((resolve) => probe.listen(0, '127.0.0.1', resolve));
	const { port } = probe.address() as AddressInfo;
	await new Promise((resolve) => probe.close(resolve));
	return port;
}
