import { randomBytes } from 'node:crypto';
import type { RequestEvent } from '@sveltejs/kit';
import { faultOf, logger } from '../logger.ts';

/**
 * Logs a bug once.
 *
 * @returns the random id under which it stands in the log; the person sees it and can quote it
 */
export function reportFault(error: unknown, event: Pick<RequestEvent, 'route' | 'request' | 'locals'>): string {
	const errorId = randomBytes(6).toString('hex');
	const { requestId } = event.locals;
	logger.error(
		{ errorId, requestId, route: event.route.id, method: event.request.method, ...faultOf(error) },
		'request failed'
	);
	return errorId;
}
