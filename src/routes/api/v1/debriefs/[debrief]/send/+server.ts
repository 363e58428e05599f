import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { debriefSendSchema } from '$lib/schemas/debrief';
import { sendDebrief } from '$lib/server/services/debriefsEdit';
import type { RequestEvent } from './$types';

/** Sends a debrief; what is sent stays as it is. A second time changes nothing. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	const { revision } = await readJson(event.request, debriefSendSchema);
	return jsonResponse(JSON.stringify(await sendDebrief(viewer, event.params.debrief, revision)));
});
