import type { RequestEvent } from '@sveltejs/kit';
import { reportFault } from './reportFault.ts';
import { problemOf, problemResponse } from './problem.ts';

/** Wraps a handler of the API, so that every failure is `application/problem+json`: known problems as they are, bugs by their id. */
export function apiRoute<Event extends RequestEvent>(answer: (event: Event) => Promise<Response>) {
	return async (event: Event): Promise<Response> => {
		try {
			return await answer(event);
		} catch (thrown) {
			const known = problemOf(thrown);
			if (known) return known;
			const errorId = reportFault(thrown, event);
			return problemResponse({ status: 500, code: 'internal', detail: 'something broke on our side', errorId });
		}
	};
}
