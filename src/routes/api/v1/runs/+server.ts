import { runsQuerySchema } from '$lib/schemas/api';
import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readQuery } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { loadRuns } from '$lib/server/services/loadRuns';

/** Runs that the viewer may see, newest first. */
export const GET = apiRoute(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	return jsonResponse(JSON.stringify(await loadRuns(viewer, readQuery(event.url, runsQuerySchema))));
});
