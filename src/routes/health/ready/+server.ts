import { isReady } from '$lib/server/db/isReady';
import type { RequestHandler } from './$types';

/** The process can do its work: the database answers and has the newest schema. */
export const GET: RequestHandler = async () => {
	const ready = await isReady();
	return new Response(ready ? 'ready' : 'not ready', {
		status: ready ? 200 : 503,
		headers: { 'content-type': 'text/plain' }
	});
};
