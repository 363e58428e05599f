import { stopRunning } from './processes.mjs';

/** npm passes Ctrl-C on to a process that the terminal has told already; only a later one is impatience. */
const SAME_REQUEST_MS = 2000;

/**
 * @typedef {object} StopWatch
 * @property {() => boolean} requested
 * @property {() => void} check  throws StopRequested once there was a request
 */

/** Thrown between two steps of a start that somebody has asked to stop. */
export class StopRequested extends Error {}

/**
 * Listens for Ctrl-C, SIGTERM, a closed terminal and the end of the npm that began this process.
 *
 * The first request ends the command that runs just now and lets the work come to a place where it can stop; one that comes
 * again two seconds later ends this process at once (its services follow by themselves).
 *
 * @returns {StopWatch}
 */
export function listenForStop() {
	let requestedAt = 0;
	const request = () => {
		if (requestedAt && Date.now() - requestedAt > SAME_REQUEST_MS) process.exit(130);
		requestedAt ||= Date.now();
		stopRunning();
	};
	// npm, killed without a chance to pass it on, leaves its script behind: a changed parent says so.
	const parent = process.ppid;
	if (process.env.npm_lifecycle_event) {
		setInterval(() => process.ppid !== parent && !requestedAt && request(), 500).unref();
	}
	for (const name of /** @type {const} */ (['SIGINT', 'SIGTERM', 'SIGHUP'])) process.on(name, request);
	return {
		requested: () => requestedAt > 0,
		check: () => {
			if (requestedAt) throw new StopRequested();
		}
	};
}
