import type { Handle } from '@sveltejs/kit';
import { NOT_FOUND_TEXT } from '../http/notFound.ts';
import { problemResponse } from '../http/problem.ts';
import { reportFault } from '../http/reportFault.ts';
import { askToComeBack } from '../upload/resumable/askToComeBack.ts';

/** Under /api/ also the framework's own refusals (no such path, no such method) are problem details. */
export const speakProblem: Handle = async ({ event, resolve }) => {
	const response = await resolveOrComeBack({ event, resolve });
	if (!event.url.pathname.startsWith('/api/')) return response;
	if (response.status === 404 && !isJson(response)) {
		return problemResponse({ status: 404, code: 'not_found', detail: NOT_FOUND_TEXT });
	}
	if (response.status === 405) {
		const allow = response.headers.get('allow') ?? '';
		const detail = `the path requires one of ${allow}, got ${event.request.method}`;
		return problemResponse({ status: 405, code: 'method_not_allowed', detail }, { allow });
	}
	return response;
};

/** A question how far a file is must not fail because the database is away for a moment. */
async function resolveOrComeBack({ event, resolve }: Parameters<Handle>[0]): Promise<Response> {
	const instead = askToComeBack(event.request.method, event.url.pathname);
	if (!instead) return await resolve(event);
	try {
		const response = await resolve(event);
		return response.status >= 500 ? instead : response;
	} catch (error) {
		reportFault(error, event);
		return instead;
	}
}

function isJson(response: Response): boolean {
	return response.headers.get('content-type')?.includes('json') ?? false;
}
