import { layoutNamesSchema } from '$lib/schemas/api';
import { apiRoute } from '$lib/server/http/apiRoute';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { nameLayout } from '$lib/server/services/nameLayout';
import type { RequestEvent } from './$types';

/** Gives a circuit, its layout and its corners their names. */
export const PATCH = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	await nameLayout(viewer, event.params.layout, await readJson(event.request, layoutNamesSchema));
	return new Response(null, { status: 204 });
});
