import { closeDatabase } from '../db/database.ts';
import { environment } from '../environment.ts';
import { logger } from '../logger.ts';

/** Checks the settings before the first request, and lets the process end when it is told to. */
export function init(): void {
	environment();
	// The adapter says when the last request was answered; an open pool would keep the process alive for half a minute.
	process.once('sveltekit:shutdown', (reason: unknown) => {
		logger.info({ reason }, 'server stops');
		void closeDatabase();
	});
}
