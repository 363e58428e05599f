import { traceQuerySchema } from '$lib/schemas/api';
import { apiRoute } from '$lib/server/http/apiRoute';
import { isKnown, notModified } from '$lib/server/http/json';
import { readQuery } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { loadTrace } from '$lib/server/services/loadTrace';
import type { RequestEvent } from './$types';

/** Columns of one lap on the path's 1 m grid, binary. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	const { etag, frame } = await loadTrace(viewer, event.params.lap, readQuery(event.url, traceQuerySchema));
	if (isKnown(event.request, etag)) return notModified(etag);
	const bytes = await frame();
	return new Response(bytes, {
		headers: {
			'content-type': 'application/vnd.kerbnote.trace',
			'content-length': String(bytes.length),
			'cache-control': 'private, no-cache',
			etag
		}
	});
});
