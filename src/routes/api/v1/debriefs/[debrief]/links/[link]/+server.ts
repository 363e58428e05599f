import { apiRoute } from '$lib/server/http/apiRoute';
import { requireViewer } from '$lib/server/http/requireViewer';
import { revokeLink } from '$lib/server/services/debriefLinks';
import type { RequestEvent } from './$types';

/** Ends a link: from now on it opens nothing. */
export const DELETE = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	await revokeLink(viewer, event.params.debrief, event.params.link);
	return new Response(null, { status: 204 });
});
