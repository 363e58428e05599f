import { loadComparison } from '$lib/server/services/loadComparison';
import { lapPage } from '$lib/view/lapPage';
import { signedIn } from '../../../../signedIn';
import { compareKick, otherLaps } from '../choices';
import type { PageServerLoad } from './$types';

export const load = (async ({ locals, params }) => {
	const viewer = signedIn(locals);
	const date = { now: new Date() };
	const view = await loadComparison(viewer, params.lap, params.reference);
	return {
		lapPage: lapPage(view, { speedUnit: viewer.preferences.speedUnit, date }),
		kick: compareKick(view, date),
		brakeScale: view.brakeScale,
		others: otherLaps(view)
	};
}) satisfies PageServerLoad;
