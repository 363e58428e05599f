import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { replyInputSchema } from '$lib/schemas/zoneNote';
import { replyToNote } from '$lib/server/services/zoneNotesEdit';
import type { RequestEvent } from './$types';

/** Answers a note. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	const { body } = await readJson(event.request, replyInputSchema);
	return jsonResponse(JSON.stringify(await replyToNote(viewer, event.params.note, body)), 201);
});
