import { keptPeople } from '../../access/seenRuns.ts';
import type { Viewer } from '../../access/viewer.ts';
import { database } from '../../db/database.ts';
import { faultOf, logger } from '../../logger.ts';
import { uploadFeed, type UploadEvent } from './uploadFeed.ts';

/** Proxies close what says nothing for a minute. */
const BEAT_MS = 15_000;
/** A stream outlives its sign-in by no more than this. */
const RECHECK_MS = 2_000;
/** How long a browser waits before it comes back. */
const RETRY_MS = 2_000;

/**
 * The viewer's uploads as server-sent events: first those that are under way, then every change. Ends when the client goes, when
 * the server stops, and when whoever asked is signed out.
 *
 * @param whoAsks the viewer by the request's own cookie or token, looked up anew
 */
export async function openUploadStream(
	viewer: Viewer,
	whoAsks: () => Promise<Viewer | null>
): Promise<ReadableStream<Uint8Array>> {
	const owners = await keptPeople(database(), viewer);
	const encoder = new TextEncoder();
	let close = () => {};
	return new ReadableStream<Uint8Array>({
		start(controller) {
			const write = (text: string) => controller.enqueue(encoder.encode(text));
			const timers = [setInterval(() => write(': beat\n\n'), BEAT_MS), setInterval(() => void recheck(), RECHECK_MS)];
			const leave = uploadFeed().subscribe({
				owners,
				send: (event) => write(lineOf(event)),
				end: () => finish()
			});
			close = () => {
				timers.forEach(clearInterval);
				leave();
				close = () => {};
			};
			const finish = () => {
				close();
				write('event: end\ndata: {}\n\n');
				controller.close();
			};
			async function recheck(): Promise<void> {
				try {
					const now = await whoAsks();
					if (now?.personId !== viewer.personId) finish();
				} catch (error) {
					// A database that is away says nothing about a sign-in.
					logger.debug(faultOf(error), 'a stream could not be checked');
				}
			}
			write(`retry: ${RETRY_MS}\n\n`);
		},
		cancel: () => close()
	});
}

function lineOf(event: UploadEvent): string {
	return `event: ${event.kind}\ndata: ${event.json}\n\n`;
}
