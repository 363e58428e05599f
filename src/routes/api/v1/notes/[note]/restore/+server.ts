import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { requireViewer } from '$lib/server/http/requireViewer';
import { restoreNote } from '$lib/server/services/zoneNotesEdit';
import type { RequestEvent } from './$types';

/** Brings a deleted note back. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	return jsonResponse(JSON.stringify(await restoreNote(viewer, event.params.note)));
});
