import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { requireViewer } from '$lib/server/http/requireViewer';
import { loadUpload } from '$lib/server/services/loadUpload';
import { deleteUpload } from '$lib/server/upload/deleteUpload';
import type { RequestEvent } from './$types';

/** How far the upload is, what was understood of it, and its runs. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	return jsonResponse(JSON.stringify(await loadUpload(viewer, event.params.upload)));
});

/** Takes the upload and its runs out of sight. */
export const DELETE = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'uploads:write');
	await deleteUpload(viewer, event.params.upload);
	return new Response(null, { status: 204 });
});
