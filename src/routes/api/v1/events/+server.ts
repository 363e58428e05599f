import { apiRoute } from '$lib/server/http/apiRoute';
import { requireViewer } from '$lib/server/http/requireViewer';
import { whoAsks } from '$lib/server/hooks/findViewer';
import { openUploadStream } from '$lib/server/upload/feed/uploadStream';

/** What becomes of the viewer's uploads, as it happens. */
export const GET = apiRoute(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	const body = await openUploadStream(viewer, () => whoAsks(event));
	return new Response(body, {
		headers: {
			'content-type': 'text/event-stream',
			'cache-control': 'private, no-cache, no-transform',
			// A proxy that gathers the answer would keep every line back.
			'x-accel-buffering': 'no'
		}
	});
});
