import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { requireViewer } from '$lib/server/http/requireViewer';
import { restoreRun } from '$lib/server/services/editRun';
import { loadRun } from '$lib/server/services/loadRun';
import type { RequestEvent } from './$types';

/** Brings a deleted run back. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	await restoreRun(viewer, event.params.run);
	return jsonResponse(JSON.stringify(await loadRun(viewer, event.params.run)));
});
