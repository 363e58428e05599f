import type { Handle, RequestEvent } from '@sveltejs/kit';
import { problemResponse } from '../http/problem.ts';

const SAFE_METHODS = new Set(['GET', 'HEAD', 'OPTIONS']);
/** Forms and JSON. */
const LARGEST_BODY_BYTES = 512 * 1024;
/** Raw files, which are never held in memory, have a limit of their own in their routes: whole, and in pieces. */
const RAW_UPLOAD_PATH = '/api/v1/uploads';
const PIECES_PATH = '/api/v1/uploads/resumable';
const PIECE_TYPE = 'application/offset+octet-stream';
/** A mail program's one click (RFC 8058) comes from anywhere, without cookie and Origin; its signed token says all. */
const ONE_CLICK_ROUTE = '/unsubscribe/[token]';
/** A file as a form, from a browser without script, is held in memory. */
const FORM_UPLOAD_PATH = '/upload';
const LARGEST_FORM_UPLOAD_BYTES = 32 * 1024 * 1024;

/**
 * Stops what no route needs to see: a change asked for by a page of another site, and bodies that nobody would read.
 *
 * A browser sends Origin with every change. A program signs in by token, which no other site's page can add, so it may leave
 * Origin out.
 */
export const guardRequest: Handle = async ({ event, resolve }) => {
	const { request } = event;
	if (!SAFE_METHODS.has(request.method)) {
		const isForAnybody = event.route.id === ONE_CLICK_ROUTE;
		if (!hasBearer(event) && !isForAnybody && request.headers.get('origin') !== event.url.origin) {
			return problemResponse({
				status: 403,
				code: 'foreign_origin',
				detail: `a change requires the origin ${event.url.origin}, got ${request.headers.get('origin') ?? 'none'}`
			});
		}
		const refusal = refuseBody(event);
		if (refusal) return refusal;
	}
	return await resolve(event);
};

export function hasBearer(event: Pick<RequestEvent, 'request'>): boolean {
	return /^bearer /i.test(event.request.headers.get('authorization') ?? '');
}

/** Every body but a raw upload states its length, so that the limit holds before a byte is read. */
function refuseBody(event: RequestEvent): Response | null {
	const { request } = event;
	if (request.body === null || isRawUpload(event)) return null;
	const stated = request.headers.get('content-length');
	if (stated === null) {
		return problemResponse({ status: 411, code: 'length_required', detail: 'the request requires a Content-Length' });
	}
	const largest = event.url.pathname === FORM_UPLOAD_PATH ? LARGEST_FORM_UPLOAD_BYTES : LARGEST_BODY_BYTES;
	if (!(Number(stated) <= largest)) {
		return problemResponse({
			status: 413,
			code: 'body_too_large',
			detail: `the request requires at most ${largest} bytes, got ${stated}`
		});
	}
	return null;
}

function isRawUpload({ request, url }: RequestEvent): boolean {
	if (request.method === 'PUT') return url.pathname === RAW_UPLOAD_PATH;
	return (
		(request.method === 'PATCH' || request.method === 'POST') &&
		url.pathname.startsWith(PIECES_PATH) &&
		request.headers.get('content-type') === PIECE_TYPE
	);
}
