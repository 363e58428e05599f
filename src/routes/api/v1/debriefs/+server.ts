import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { debriefInputSchema } from '$lib/schemas/debrief';
import { loadDebriefs } from '$lib/server/services/debriefs';
import { startDebrief } from '$lib/server/services/debriefsEdit';
import type { RequestEvent } from './$types';

/** Debriefs that one writes or received. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	return jsonResponse(JSON.stringify({ debriefs: await loadDebriefs(viewer) }));
});

/** Drafts a debrief on a run, or goes on with the one that was not sent yet. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	const input = await readJson(event.request, debriefInputSchema);
	return jsonResponse(JSON.stringify(await startDebrief(viewer, input)), 201);
});
