import { cornerMapChangeSchema } from '$lib/schemas/cornerMap';
import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { changeCornerMap, loadCornerMap } from '$lib/server/services/changeCornerMap';
import type { RequestEvent } from './$types';

/** The corner map that counts, with kinks and versions. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	return jsonResponse(JSON.stringify(await loadCornerMap(viewer, event.params.layout)));
});

/** Edits it, undoes an edit, or says what either would change. 202: laps are being cut. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	const change = await readJson(event.request, cornerMapChangeSchema);
	const answer = await changeCornerMap(viewer, event.params.layout, change);
	return jsonResponse(JSON.stringify(answer), answer.version === null ? 200 : 202);
});
