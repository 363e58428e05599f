import { closeDatabase } from '../db/database.ts';
import { environment } from '../environment.ts';
import { logger } from '../logger.ts';
import { uploadFeed } from '../upload/feed/uploadFeed.ts';

/** Checks the settings before the first request, and lets the process end when it is told to. */
export function init(): void {
	environment();
	// A stream is open until its client goes; the server would wait for it.
	for (const signal of ['SIGTERM', 'SIGINT'] as const) process.once(signal, () => uploadFeed().end());
	// The adapter says when the last request was answered; an open pool would keep the process alive for half a minute.
	process.once('sveltekit:shutdown', (reason: unknown) => {
		logger.info({ reason }, 'server stops');
		void closeDatabase();
	});
}
