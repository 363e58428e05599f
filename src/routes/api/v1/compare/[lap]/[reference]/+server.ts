import { apiRoute } from '$lib/server/http/apiRoute';
import { isKnown, jsonResponse, notModified } from '$lib/server/http/json';
import { requireViewer } from '$lib/server/http/requireViewer';
import { comparisonJson } from '$lib/server/services/comparisonDocument';
import { loadComparison } from '$lib/server/services/loadComparison';
import type { RequestEvent } from './$types';

/** Two laps laid on each other: Δ, the time ledger, findings. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	const view = await loadComparison(viewer, event.params.lap, event.params.reference);
	const etag = `"${view.contentHash.slice(0, 32)}"`;
	return isKnown(event.request, etag) ? notModified(etag) : jsonResponse(comparisonJson(view), 200, { etag });
});
