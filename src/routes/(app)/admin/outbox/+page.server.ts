import { database } from '$lib/server/db/database';
import { listOutbox } from '$lib/server/mail/listOutbox';
import { signedIn } from '../../signedIn';
import { isTrial } from './isTrial';
import type { PageServerLoad } from './$types';

export const load = (async ({ locals }) => ({
	letters: await listOutbox(database(), signedIn(locals), isTrial())
})) satisfies PageServerLoad;
