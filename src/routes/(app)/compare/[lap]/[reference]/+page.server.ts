import { loadComparePage } from '$lib/server/services/loadCompareModels';
import { signedIn } from '../../../signedIn';
import { compareKick, lapChoices, lapSwitch, referenceChoices } from './choices';
import type { PageServerLoad } from './$types';

export const load = (async ({ locals, params, url }) => {
	const viewer = signedIn(locals);
	const date = { now: new Date() };
	const { speedUnit } = viewer.preferences;
	const place = url.searchParams.get('order') === 'lap' ? '?order=lap' : '';
	const { view, page } = await loadComparePage(viewer, params.lap, params.reference, { speedUnit, date });
	return {
		page,
		kick: compareKick(view, date),
		references: referenceChoices(view, date, place),
		laps: lapChoices(view, place),
		lapSwitch: lapSwitch(view, place),
		lap: view.driver.id
	};
}) satisfies PageServerLoad;
