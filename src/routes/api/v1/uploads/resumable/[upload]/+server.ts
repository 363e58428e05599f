import { apiRoute } from '$lib/server/http/apiRoute';
import { requireViewer } from '$lib/server/http/requireViewer';
import { handleResumable } from '$lib/server/upload/resumable/handleResumable';
import type { RequestEvent } from './$types';

const goOn = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'uploads:write');
	return await handleResumable(viewer, event.request, event.params.upload);
});

/** How much of the file is here. */
export const HEAD = goOn;
/** The next piece. */
export const PATCH = goOn;
/** Gives the upload up. */
export const DELETE = goOn;
