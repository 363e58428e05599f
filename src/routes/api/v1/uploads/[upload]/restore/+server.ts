import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { requireViewer } from '$lib/server/http/requireViewer';
import { restoreUpload } from '$lib/server/upload/deleteUpload';
import type { RequestEvent } from './$types';

/** Brings a deleted upload back with its runs. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'uploads:write');
	return jsonResponse(JSON.stringify(await restoreUpload(viewer, event.params.upload)));
});
