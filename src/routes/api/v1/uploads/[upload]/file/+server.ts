import { apiRoute } from '$lib/server/http/apiRoute';
import { requireViewer } from '$lib/server/http/requireViewer';
import { openRawFile } from '$lib/server/upload/openRawFile';
import type { RequestEvent } from './$types';

/** The raw file, byte for byte as it was handed over. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	const { body, fileName, sizeBytes } = await openRawFile(viewer, event.params.upload);
	return new Response(body, {
		headers: {
			// Never as what it claims to be: a browser must not show or run what somebody uploaded.
			'content-type': 'application/octet-stream',
			'content-disposition': `attachment; filename="run"; filename*=UTF-8''${encodeURIComponent(fileName)}`,
			'content-length': String(sizeBytes),
			'cache-control': 'private, no-store, no-transform'
		}
	});
});
