import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { focusChangeSchema } from '$lib/schemas/focus';
import { loadFocusPoint } from '$lib/server/services/focus';
import { setFocusState } from '$lib/server/services/focusEdit';
import type { RequestEvent } from './$types';

/** One focus with the scores of every later run. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	return jsonResponse(JSON.stringify(await loadFocusPoint(viewer, event.params.focus)));
});

/** Closes, drops or opens it again. */
export const PATCH = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	const { state } = await readJson(event.request, focusChangeSchema);
	return jsonResponse(JSON.stringify(await setFocusState(viewer, event.params.focus, state)));
});
