import { chooseMail, readUnsubscribeToken } from '$lib/server/mail/unsubscribe';
import { database } from '$lib/server/db/database';
import { notFound } from '$lib/server/http/notFound';
import type { Actions, PageServerLoad } from './$types';

export const load = (async ({ params }) => {
	const { kind, isWanted } = (await readUnsubscribeToken(database(), params.token)) ?? notFound();
	return { kind, isWanted };
}) satisfies PageServerLoad;

export const actions = {
	/** The page's own buttons, and the one click of a mail program (RFC 8058), which sends no cookie and comes from anywhere. */
	default: async ({ params, request }) => {
		const { personId, kind } = (await readUnsubscribeToken(database(), params.token)) ?? notFound();
		const isWanted = (await request.formData()).get('again') === '1';
		await chooseMail(database(), personId, kind, isWanted);
		return { isWanted };
	}
} satisfies Actions;
