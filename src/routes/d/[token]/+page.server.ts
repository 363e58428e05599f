import { openLink } from '$lib/server/services/debriefLinks';
import type { PageServerLoad } from './$types';

/** Whoever holds the link reads this one debrief: no other site learns of the address, and no search engine keeps it. */
export const load = (async ({ params, setHeaders }) => {
	setHeaders({ 'referrer-policy': 'no-referrer', 'x-robots-tag': 'noindex, nofollow, noarchive' });
	return await openLink(params.token);
}) satisfies PageServerLoad;
