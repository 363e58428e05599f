import { loadDebriefs } from '$lib/server/services/debriefs';
import { signedIn } from '../signedIn';
import type { PageServerLoad } from './$types';

export const load = (async ({ locals }) => ({
	debriefs: await loadDebriefs(signedIn(locals))
})) satisfies PageServerLoad;
