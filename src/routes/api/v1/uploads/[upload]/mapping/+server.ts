import { mappingInputSchema } from '$lib/schemas/api';
import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { changeMapping, forgetMapping } from '$lib/server/upload/changeMapping';
import type { RequestEvent } from './$types';

const answer = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'uploads:write');
	const { mapping, ...keep } = await readJson(event.request, mappingInputSchema);
	return jsonResponse(JSON.stringify(await changeMapping(viewer, event.params.upload, mapping, keep)), 202);
});

/** Says how the file is to be read; it is read again. */
export const PUT = answer;
/** The same: the answer to what the file was asked for. */
export const POST = answer;

/** Forgets what was kept for files with this one's header. */
export const DELETE = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'uploads:write');
	await forgetMapping(viewer, event.params.upload);
	return new Response(null, { status: 204 });
});
