import { database } from '$lib/server/db/database';
import { readOutbox } from '$lib/server/mail/listOutbox';
import { signedIn } from '../../../signedIn';
import { isTrial } from '../isTrial';
import type { PageServerLoad } from './$types';

export const load = (async ({ locals, params }) => ({
	letter: await readOutbox(database(), signedIn(locals), isTrial(), params.letter)
})) satisfies PageServerLoad;
