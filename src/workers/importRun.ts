import type { MessagePort } from 'node:worker_threads';
import type { ErrorDocument } from '../lib/schemas/analysisDocument.ts';
import type { ColumnMapping } from '../lib/schemas/columnMapping.ts';
import { KerbnoteError } from '../lib/schemas/kerbnoteError.ts';
import { analyseFile } from '../lib/server/importing/analyseFile.ts';
import type {
	AnalysedRun,
	ImportReport,
	ImportRequest,
	KnownBrake,
	LayoutCandidate
} from '../lib/server/importing/importMessages.ts';
import { headersOf, peekHeaders } from '../lib/server/importing/peekHeaders.ts';
import { plainBytes } from '../lib/server/importing/plainBytes.ts';

/** A request with the line on which the thread reports and asks. */
export interface ImportMail extends ImportRequest {
	port: MessagePort;
}

/** What was read, or why not. */
export type ImportAnswer = ({ runs: AnalysedRun[] } | { refusal: ErrorDocument['error'] }) & {
	/** of the table; null where none was found */
	headers: string[] | null;
	/** the remembered answer that the file was read by; null for none */
	remembered: ColumnMapping | null;
};

/** A report for each chunk would cost more than it tells. */
const REPORT_EVERY_MS = 150;

/**
 * Thread entry: reads and analyses one raw file. Always answers; what is wrong with the file is an answer too, for an error loses
 * its class on the way to another thread.
 */
export default async function importRun({ port, ...request }: ImportMail): Promise<ImportAnswer> {
	let remembered: ColumnMapping | null = null;
	try {
		remembered = await lookForMapping(port, request);
		const runs = await analyseFile(await plainBytes(request.path), {
			...request,
			mapping: request.mapping ?? remembered,
			progress: reporter(port),
			brake: (metadata) => ask<KnownBrake | null>(port, { kind: 'brake', metadata }),
			candidates: (fingerprint, runIndex) => ask<LayoutCandidate[]>(port, { kind: 'candidates', fingerprint, runIndex })
		});
		return { runs, headers: headersOf(runs[0].document.source.columns), remembered };
	} catch (error) {
		if (!(error instanceof KerbnoteError)) throw error;
		const headers = error.question ? headersOf(error.question.columns) : null;
		return { refusal: error.toDocument().error, headers, remembered };
	} finally {
		port.close();
	}
}

function reporter(port: MessagePort) {
	let lastReportMs = 0;
	let lastStage = '';
	return (stage: Extract<ImportReport, { kind: 'progress' }>['stage'], progress: number, rowsRead: number): void => {
		const nowMs = performance.now();
		if (stage === lastStage && nowMs - lastReportMs < REPORT_EVERY_MS) return;
		lastReportMs = nowMs;
		lastStage = stage;
		port.postMessage({ kind: 'progress', stage, progress, rowsRead } satisfies ImportReport);
	};
}

/** What somebody answered before for files with this one's header. */
async function lookForMapping(port: MessagePort, request: ImportRequest): Promise<ColumnMapping | null> {
	if (request.mapping !== null || !request.looksForMapping) return null;
	const headers = await peekHeaders(await plainBytes(request.path), request.fileName);
	return headers && (await ask<ColumnMapping | null>(port, { kind: 'mapping', headers }));
}

/** One question at a time, so that the next message is its answer. */
function ask<Answer>(port: MessagePort, question: ImportReport): Promise<Answer> {
	return new Promise((resolve) => {
		port.once('message', resolve);
		port.postMessage(question);
	});
}
