import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { requireViewer } from '$lib/server/http/requireViewer';
import { analyseAgain } from '$lib/server/upload/changeMapping';
import type { RequestEvent } from './$types';

/** Reads and analyses the kept file again. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'uploads:write');
	return jsonResponse(JSON.stringify(await analyseAgain(viewer, event.params.upload)), 202);
});
