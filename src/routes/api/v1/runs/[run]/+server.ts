import { runDescriptionSchema } from '$lib/schemas/api';
import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { deleteRun, describeRun } from '$lib/server/services/editRun';
import { loadRun } from '$lib/server/services/loadRun';
import type { RequestEvent } from './$types';

/** One run with its laps and corners. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	return jsonResponse(JSON.stringify(await loadRun(viewer, event.params.run)));
});

/** Writes down where, in what, in which conditions and what for it was driven. */
export const PATCH = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	await describeRun(viewer, event.params.run, await readJson(event.request, runDescriptionSchema));
	return jsonResponse(JSON.stringify(await loadRun(viewer, event.params.run)));
});

/** Takes the run out of sight; its file stays. */
export const DELETE = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	await deleteRun(viewer, event.params.run);
	return new Response(null, { status: 204 });
});
