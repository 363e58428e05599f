import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { debriefSaveSchema } from '$lib/schemas/debrief';
import { loadDebrief } from '$lib/server/services/debriefs';
import { saveDebrief, setDebriefDeleted } from '$lib/server/services/debriefsEdit';
import type { RequestEvent } from './$types';

/** A debrief: as it is written, or the frozen copy. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	return jsonResponse(JSON.stringify(await loadDebrief(viewer, event.params.debrief)));
});

/** Saves what the coach writes; who wrote on an older revision is told, with both texts. */
export const PUT = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	const save = await readJson(event.request, debriefSaveSchema);
	return jsonResponse(JSON.stringify(await saveDebrief(viewer, event.params.debrief, save)));
});

/** Takes a draft out of sight. */
export const DELETE = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	await setDebriefDeleted(viewer, event.params.debrief, true);
	return new Response(null, { status: 204 });
});
