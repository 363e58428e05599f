import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { linkInputSchema } from '$lib/schemas/debrief';
import { makeLink } from '$lib/server/services/debriefLinks';
import type { RequestEvent } from './$types';

/** Makes a link that shows this debrief to whoever holds it; its path is told this once. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	const { days } = await readJson(event.request, linkInputSchema);
	return jsonResponse(JSON.stringify({ path: await makeLink(viewer, event.params.debrief, days) }), 201);
});
