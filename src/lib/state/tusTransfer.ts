import type { DetailedError, HttpResponse, Upload } from 'tus-js-client';
import { problemOfAnswer } from './answers.ts';
import { LINE_BROKEN, type Transfer, type TransferEvents } from './transfer.ts';

const ENDPOINT = '/api/v1/uploads/resumable';

/** A cut costs at most this much; small enough for proxies that hold a request back until it is whole. */
const CHUNK_BYTES = 4 * 1024 * 1024;
/** Up to here a file goes with the request that announces it; beyond, a cut of that request would lose its way back. */
const AT_ONCE_BYTES = 256 * 1024;
/** After a cut; a quarter of an hour in all, then a person decides. The count begins anew with every byte that gets through. */
const RETRY_MS = [0, 500, 1000, 2000, 4000, 8000, 15_000, ...Array.from({ length: 28 }, () => 30_000)];

/** Statuses that mean the same file may go again: the rest is an answer. */
function isPassing(status: number) {
	return status === 0 || status === 408 || status === 409 || status === 423 || status === 429 || status >= 500;
}

/** What a file is known by in this browser, for the person who is signed in: another person's begun uploads are not theirs. */
export function fingerprintOf(personId: string, { name, size, lastModified }: File) {
	return ['kerbnote', personId, name, size, lastModified].join('-');
}

/** Hands a file over by tus; a file that was begun before goes on where it stopped, even after a reload. */
export function tusTransfer(personId: string, file: File, events: TransferEvents): Transfer {
	const fingerprint = fingerprintOf(personId, file);
	let upload: Upload | null = null;
	/** stands until the next pause */
	let going: AbortController | null = null;
	let releaseLock: (() => void) | null = null;

	const fail = (error: Error | DetailedError) => {
		const response = 'originalResponse' in error ? error.originalResponse : null;
		stop();
		if (response && response.getStatus() !== 0) {
			events.onfault(problemOfAnswer(response.getStatus(), response.getBody()));
		} else if (!navigator.onLine) {
			events.oncut();
			const again = new AbortController();
			going = again;
			window.addEventListener('online', () => void go(again), { once: true, signal: again.signal });
		} else events.onfault(LINE_BROKEN);
	};
	const stop = () => {
		going?.abort();
		going = null;
		releaseLock?.();
		releaseLock = null;
	};

	async function go(own: AbortController): Promise<void> {
		try {
			releaseLock = await lockFile(fingerprint, own.signal);
			const { Upload } = await import('tus-js-client');
			if (own.signal.aborted) return;
			const next = new Upload(file, {
				endpoint: ENDPOINT,
				chunkSize: CHUNK_BYTES,
				uploadDataDuringCreation: file.size <= AT_ONCE_BYTES,
				retryDelays: RETRY_MS,
				removeFingerprintOnSuccess: true,
				metadata: { filename: file.name },
				fingerprint: async () => fingerprint,
				onUploadUrlAvailable: () => events.oncreated(idOf(next.url)),
				onProgress: (sentBytes) => events.onprogress(sentBytes),
				onShouldRetry: ({ originalResponse }) => {
					const mayRetry = isPassing(originalResponse?.getStatus() ?? 0) && navigator.onLine;
					if (mayRetry) events.oncut();
					return mayRetry;
				},
				onError: fail,
				onSuccess: ({ lastResponse }) => {
					stop();
					events.onarrived(readArrival(lastResponse, next.url));
				}
			});
			const [previous] = (await next.findPreviousUploads()).sort((one, other) =>
				other.creationTime.localeCompare(one.creationTime)
			);
			if (own.signal.aborted) return;
			if (previous) next.resumeFromPreviousUpload(previous);
			upload = next;
			next.start();
		} catch (error) {
			if (!own.signal.aborted) fail(error instanceof Error ? error : new Error(String(error)));
		}
	}

	return {
		start: () => {
			stop();
			going = new AbortController();
			void go(going);
		},
		pause: async () => {
			stop();
			await upload?.abort();
		},
		giveUp: async () => {
			stop();
			if (upload) await upload.abort(true);
		}
	};
}

function idOf(url: string | null): string {
	return new URL(url ?? '', location.href).pathname.split('/').pop() ?? '';
}

function readArrival(response: HttpResponse, url: string | null) {
	return {
		id: response.getHeader('Kerbnote-Upload') ?? idOf(url),
		knownBefore: response.getHeader('Kerbnote-Same-File') === 'true'
	};
}

/** Two tabs must not send the same file: the second waits until the first is done or closed. */
async function lockFile(fingerprint: string, signal: AbortSignal): Promise<() => void> {
	if (!('locks' in navigator)) return () => {};
	return await new Promise((resolve, reject) => {
		navigator.locks
			.request(fingerprint, { signal }, () => new Promise<void>((release) => resolve(() => release())))
			.catch(reject);
	});
}

/** Does another tab send the file now? */
export async function isLocked(fingerprint: string): Promise<boolean> {
	if (!('locks' in navigator)) return false;
	const { held } = await navigator.locks.query();
	return held?.some(({ name }) => name === fingerprint) ?? false;
}
