import { existsSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { MessageChannel } from 'node:worker_threads';
import Piscina from 'piscina';
import type { ImportAnswer, ImportMail } from '../../../workers/importRun.ts';
import type { ColumnMapping } from '../../schemas/columnMapping.ts';
import type { UploadStage } from '../../schemas/views.ts';
import { environment } from '../environment.ts';
import type { ImportReport, ImportRequest, KnownBrake, LayoutCandidate, LayoutFingerprint } from './importMessages.ts';

/** What the thread reports and asks while it works. */
export interface ImportListener {
	progress(stage: UploadStage, share: number, rowsRead: number): void;
	/** what is remembered for files with this header */
	mapping(headers: string[]): Promise<ColumnMapping | null>;
	brake(metadata: Record<string, string>): Promise<KnownBrake | null>;
	candidates(fingerprint: LayoutFingerprint, runIndex: number): Promise<LayoutCandidate[]>;
}

/** Threads that read and analyse. One for each job at a time, so that the process itself stays free to say that it lives. */
export class AnalysisPool {
	readonly #pool: Piscina<ImportMail, ImportAnswer>;

	constructor(threads: number) {
		const built = join(environment().KERBNOTE_BUILD, 'workers', 'importRun.js');
		// In a bundle the entry lies beside the built worker; from sources a thread needs the loader that this process has too.
		const useBuilt = import.meta.env?.PROD === true && existsSync(built);
		this.#pool = new Piscina({
			filename: useBuilt ? built : resolve('src/workers/importRun.ts'),
			execArgv: useBuilt ? [] : ['--import', 'tsx'],
			minThreads: 1,
			maxThreads: threads,
			idleTimeout: 30_000,
			recordTiming: false
		});
	}

	/**
	 * @param signal ends the thread at once; nothing was stored yet
	 * @throws what broke in the thread; a refused file is an answer
	 */
	async run(request: ImportRequest, listener: ImportListener, signal: AbortSignal): Promise<ImportAnswer> {
		const { port1, port2 } = new MessageChannel();
		let fault: unknown;
		port1.on('message', (report: ImportReport) => {
			if (report.kind === 'progress') {
				return listener.progress(report.stage, report.progress, report.rowsRead);
			}
			answerTo(report, listener).then(
				(found) => port1.postMessage(found),
				(error: unknown) => {
					// The thread must get an answer; the job fails by what is kept here.
					fault = error;
					port1.postMessage(report.kind === 'candidates' ? [] : null);
				}
			);
		});
		try {
			const answer = await this.#pool.run({ ...request, port: port2 }, { transferList: [port2], signal });
			if (fault) throw fault;
			return answer;
		} finally {
			port1.close();
		}
	}

	async close(): Promise<void> {
		await this.#pool.destroy();
	}
}

async function answerTo(
	report: Exclude<ImportReport, { kind: 'progress' }>,
	listener: ImportListener
): Promise<KnownBrake | ColumnMapping | LayoutCandidate[] | null> {
	if (report.kind === 'brake') return await listener.brake(report.metadata);
	if (report.kind === 'mapping') return await listener.mapping(report.headers);
	return await listener.candidates(report.fingerprint, report.runIndex);
}
