import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson, readQuery } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { focusInputSchema, focusQuerySchema } from '$lib/schemas/focus';
import { loadFocusList } from '$lib/server/services/focus';
import { openFocus } from '$lib/server/services/focusEdit';
import type { RequestEvent } from './$types';

/** A driver's focus points with their scores. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	const { driver } = readQuery(event.url, focusQuerySchema);
	return jsonResponse(JSON.stringify(await loadFocusList(viewer, driver)));
});

/** Opens a focus. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	return jsonResponse(JSON.stringify(await openFocus(viewer, await readJson(event.request, focusInputSchema))), 201);
});
