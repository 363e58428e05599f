import { error } from '@sveltejs/kit';
import { dev } from '$app/environment';
import type { PageServerLoad } from './$types';

/** Every chart in every state. Absent in production unless a test asks for it. */
export const load = (() => {
	if (!dev && process.env.KERBNOTE_GALLERY !== '1')
		error(404, { message: 'Not found', code: 'not_found', errorId: '' });
}) satisfies PageServerLoad;
