import { error } from '@sveltejs/kit';
import { dev } from '$app/environment';
import { comparePage } from '$lib/view/comparePage';
import { cornerCard } from '$lib/view/cornerCard';
import { lapPage } from '$lib/view/lapPage';
import { RECORDED, recordedView } from './recordedView';
import type { PageServerLoad } from './$types';

/** Every chart in every state. Absent in production unless a test asks for it. */
export const load = (async ({ url }) => {
	if (!dev && process.env.KERBNOTE_GALLERY !== '1')
		error(404, { message: 'Not found', code: 'not_found', errorId: '' });
	const view = await recordedView(url.searchParams.get('example') ?? '');
	const date = { now: new Date() };
	return {
		recorded: RECORDED,
		models: view && {
			page: comparePage(view, { date }),
			lap: lapPage(view, { date }),
			card: cornerCard(view, Number(url.searchParams.get('corner') ?? 1), { date })
		}
	};
}) satisfies PageServerLoad;
