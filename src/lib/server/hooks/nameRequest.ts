import { randomBytes } from 'node:crypto';
import type { Handle } from '@sveltejs/kit';
import { logger } from '../logger.ts';

/** Gives each request a name that its log lines carry, and logs how it ended. */
export const nameRequest: Handle = async ({ event, resolve }) => {
	event.locals.requestId = randomBytes(6).toString('hex');
	event.locals.viewer = null;
	const startMs = performance.now();
	const response = await resolve(event);
	const { requestId } = event.locals;
	const ms = Math.round(performance.now() - startMs);
	// The path may hold ids of runs and people, so the route's pattern stands in.
	logger.debug(
		{ requestId, method: event.request.method, route: event.route.id, status: response.status, ms },
		'request'
	);
	return response;
};
