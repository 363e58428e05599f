import type { ViewerHead } from '$lib/schemas/views';
import type { LayoutServerLoad } from './$types';

export const load = (() => {
	const viewer: ViewerHead | null = null;
	return { viewer: viewer as ViewerHead | null, now: new Date().toISOString() };
}) satisfies LayoutServerLoad;
