import { uploadQuerySchema } from '$lib/schemas/api';
import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readQuery } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { loadUploadHead, loadUploads } from '$lib/server/services/loadUpload';
import { bodyChunks } from '$lib/server/upload/bodyChunks';
import { receiveUpload } from '$lib/server/upload/receiveUpload';

/** The viewer's last uploads. */
export const GET = apiRoute(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	return jsonResponse(JSON.stringify({ uploads: await loadUploads(viewer) }));
});

/** Hands over one raw file; it is kept, and read as soon as a worker is free. */
export const PUT = apiRoute(async (event) => {
	const viewer = requireViewer(event, 'uploads:write');
	const { name } = readQuery(event.url, uploadQuerySchema);
	const { id, sameFile } = await receiveUpload(viewer, name, bodyChunks(event.request));
	return jsonResponse(JSON.stringify(await loadUploadHead(viewer, id)), sameFile ? 200 : 202, {
		location: `/api/v1/uploads/${id}`,
		...(sameFile && { 'kerbnote-same-file': 'true' })
	});
});
