import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { replyInputSchema } from '$lib/schemas/zoneNote';
import { answerDebrief } from '$lib/server/services/debriefsEdit';
import type { RequestEvent } from './$types';

/** Answers a sent debrief. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	const { body } = await readJson(event.request, replyInputSchema);
	return jsonResponse(JSON.stringify(await answerDebrief(viewer, event.params.debrief, body)), 201);
});
