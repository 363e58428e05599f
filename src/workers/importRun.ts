import { createReadStream } from 'node:fs';
import { open } from 'node:fs/promises';
import type { MessagePort } from 'node:worker_threads';
import { createGunzip } from 'node:zlib';
import type { ErrorDocument } from '../lib/schemas/analysisDocument.ts';
import { KerbnoteError } from '../lib/schemas/kerbnoteError.ts';
import { analyseFile } from '../lib/server/importing/analyseFile.ts';
import type {
	AnalysedRun,
	ImportReport,
	ImportRequest,
	KnownBrake,
	LayoutCandidate
} from '../lib/server/importing/importMessages.ts';

/** A request with the line on which the thread reports and asks. */
export interface ImportMail extends ImportRequest {
	port: MessagePort;
}
export type ImportAnswer = { runs: AnalysedRun[] } | { refusal: ErrorDocument['error'] };

const CHUNK_BYTES = 1 << 20;
/** What a compressed file may become; beyond it is a bomb or a mistake. */
const LARGEST_INFLATED_BYTES = 2 * 1024 ** 3;
/** A report for each chunk would cost more than it tells. */
const REPORT_EVERY_MS = 150;

/**
 * Thread entry: reads and analyses one raw file. Always answers; what is wrong with the file is an answer too, for an error loses
 * its class on the way to another thread.
 */
export default async function importRun({ port, ...request }: ImportMail): Promise<ImportAnswer> {
	let lastReportMs = 0;
	let lastStage = '';
	const post = (report: ImportReport) => port.postMessage(report);
	try {
		const runs = await analyseFile(await plainBytes(request), {
			...request,
			progress: (stage, progress) => {
				const nowMs = performance.now();
				if (stage === lastStage && nowMs - lastReportMs < REPORT_EVERY_MS) return;
				lastReportMs = nowMs;
				lastStage = stage;
				post({ kind: 'progress', stage, progress });
			},
			brake: (metadata) => ask<KnownBrake | null>(port, { kind: 'brake', metadata }),
			candidates: (fingerprint) => ask<LayoutCandidate[]>(port, { kind: 'candidates', fingerprint })
		});
		return { runs };
	} catch (error) {
		if (error instanceof KerbnoteError) return { refusal: error.toDocument().error };
		throw error;
	} finally {
		port.close();
	}
}

/** One question at a time, so that the next message is its answer. */
function ask<Answer>(port: MessagePort, question: ImportReport): Promise<Answer> {
	return new Promise((resolve) => {
		port.once('message', resolve);
		port.postMessage(question);
	});
}

async function plainBytes({ path }: ImportRequest): Promise<AsyncIterable<Uint8Array>> {
	const source = createReadStream(path, { highWaterMark: CHUNK_BYTES });
	return (await isGzip(path)) ? inflated(source) : source;
}

async function isGzip(path: string): Promise<boolean> {
	const file = await open(path, 'r');
	try {
		const { bytesRead, buffer } = await file.read(Buffer.alloc(2), 0, 2, 0);
		return bytesRead === 2 && buffer[0] === 0x1f && buffer[1] === 0x8b;
	} finally {
		await file.close();
	}
}

async function* inflated(source: NodeJS.ReadableStream): AsyncIterable<Uint8Array> {
	const gunzip = createGunzip({ chunkSize: CHUNK_BYTES });
	source.once('error', (error) => gunzip.destroy(error));
	let total = 0;
	try {
		for await (const chunk of source.pipe(gunzip)) {
			const bytes: Uint8Array = chunk;
			total += bytes.length;
			if (total > LARGEST_INFLATED_BYTES) {
				throw new KerbnoteError(
					'file_too_large',
					'the compressed file requires at most 2 GB of text, got more',
					'Cut the recording into runs'
				);
			}
			yield bytes;
		}
	} catch (cause) {
		if (!(cause instanceof Error && 'code' in cause && String(cause.code).startsWith('Z_'))) throw cause;
		throw new KerbnoteError(
			'compressed_file',
			'the file is compressed with gzip but cannot be unpacked',
			'Export or compress it again',
			{},
			{ cause }
		);
	}
}
