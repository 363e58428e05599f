import { mappingInputSchema } from '$lib/schemas/api';
import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { changeMapping } from '$lib/server/upload/changeMapping';
import type { RequestEvent } from './$types';

/** Says how the file is to be read; it is read again. */
export const PUT = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'uploads:write');
	const { mapping } = await readJson(event.request, mappingInputSchema);
	return jsonResponse(JSON.stringify(await changeMapping(viewer, event.params.upload, mapping)), 202);
});
