import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { requireViewer } from '$lib/server/http/requireViewer';
import { loadDebrief } from '$lib/server/services/debriefs';
import { setDebriefDeleted } from '$lib/server/services/debriefsEdit';
import type { RequestEvent } from './$types';

/** Brings a deleted draft back. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	await setDebriefDeleted(viewer, event.params.debrief, false);
	return jsonResponse(JSON.stringify(await loadDebrief(viewer, event.params.debrief)));
});
