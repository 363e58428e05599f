import { version } from '$app/environment';
import { apiRoute } from '$lib/server/http/apiRoute';
import { isKnown, jsonResponse, notModified } from '$lib/server/http/json';
import { requireViewer } from '$lib/server/http/requireViewer';
import { loadComparisonDocument } from '$lib/server/services/comparisonDocument';
import type { RequestEvent } from './$types';

/** Two laps laid on each other: Δ, the time ledger, findings. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	const { hash, json } = await loadComparisonDocument(viewer, event.params.lap, event.params.reference);
	// Another build may answer otherwise out of the same data.
	const etag = `"${version}-${hash.slice(0, 32)}"`;
	return isKnown(event.request, etag) ? notModified(etag) : jsonResponse(await json(), 200, { etag });
});
