import { viewerHead } from '$lib/server/access/viewer';
import type { LayoutServerLoad } from './$types';

export const load = (({ locals }) => ({
	viewer: locals.viewer && viewerHead(locals.viewer),
	/** one moment for the server and the browser, so that both write the same dates */
	now: new Date().toISOString()
})) satisfies LayoutServerLoad;
