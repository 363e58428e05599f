import { loadComparePage } from '$lib/server/services/loadCompareModels';
import { signedIn } from '../../../signedIn';
import { compareKick, lapChoices, referenceChoices } from './choices';
import type { PageServerLoad } from './$types';

export const load = (async ({ locals, params }) => {
	const viewer = signedIn(locals);
	const date = { now: new Date() };
	const { speedUnit } = viewer.preferences;
	const { view, page } = await loadComparePage(viewer, params.lap, params.reference, { speedUnit, date });
	return {
		page,
		kick: compareKick(view, date),
		references: referenceChoices(view, date),
		laps: lapChoices(view)
	};
}) satisfies PageServerLoad;
