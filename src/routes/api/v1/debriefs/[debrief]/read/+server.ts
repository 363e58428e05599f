import { apiRoute } from '$lib/server/http/apiRoute';
import { requireViewer } from '$lib/server/http/requireViewer';
import { readDebrief } from '$lib/server/services/debriefsEdit';
import type { RequestEvent } from './$types';

/** The read receipt: the driver has it before them. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	await readDebrief(viewer, event.params.debrief);
	return new Response(null, { status: 204 });
});
