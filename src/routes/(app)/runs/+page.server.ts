import { loadRuns } from '$lib/server/services/loadRuns';
import { signedIn } from '../signedIn';
import type { PageServerLoad } from './$types';

export const load = (async ({ locals, url }) => ({
	list: await loadRuns(signedIn(locals), { cursor: url.searchParams.get('after') })
})) satisfies PageServerLoad;
