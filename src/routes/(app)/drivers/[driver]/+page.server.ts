import { loadDriver } from '$lib/server/services/invitations/loadDriver';
import { signedIn } from '../../signedIn';
import type { PageServerLoad } from './$types';

export const load = (async ({ locals, params }) => ({
	view: await loadDriver(signedIn(locals), params.driver)
})) satisfies PageServerLoad;
