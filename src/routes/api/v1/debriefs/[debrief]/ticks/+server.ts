import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { tickInputSchema } from '$lib/schemas/debrief';
import { tickTask } from '$lib/server/services/debriefsEdit';
import type { RequestEvent } from './$types';

/** The driver ticks what they tried. */
export const PUT = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	const { item, ticked } = await readJson(event.request, tickInputSchema);
	return jsonResponse(JSON.stringify(await tickTask(viewer, event.params.debrief, item, ticked)));
});
