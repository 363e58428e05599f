import { loadNotebook } from '$lib/server/services/loadNotebook';
import { signedIn } from '../signedIn';
import type { PageServerLoad } from './$types';

export const load = (async ({ locals, url }) => ({
	view: await loadNotebook(signedIn(locals), url.searchParams.get('of') ?? undefined)
})) satisfies PageServerLoad;
