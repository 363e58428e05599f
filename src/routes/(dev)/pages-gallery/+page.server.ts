import { error } from '@sveltejs/kit';
import { dev } from '$app/environment';
import type { PageServerLoad } from './$types';

/** Drawing board for pages; absent in production. */
export const load = (() => {
	if (!dev) error(404, { message: 'Not found', code: 'not_found', errorId: '' });
}) satisfies PageServerLoad;
