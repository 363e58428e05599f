import { apiRoute } from '$lib/server/http/apiRoute';
import { requireViewer } from '$lib/server/http/requireViewer';
import { handleResumable } from '$lib/server/upload/resumable/handleResumable';

/** Makes an upload that goes on after a break (tus 1.0.0). */
export const POST = apiRoute(async (event) => {
	const viewer = requireViewer(event, 'uploads:write');
	return await handleResumable(viewer, event.request, null);
});
