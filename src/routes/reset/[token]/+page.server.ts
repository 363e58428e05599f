import { fail, redirect } from '@sveltejs/kit';
import { database } from '$lib/server/db/database';
import { newPasswordSchema } from '$lib/server/auth/newPassword';
import { clientAddress } from '$lib/server/http/clientAddress';
import { redeemReset, resetHolds } from '$lib/server/services/resetByMail';
import type { Actions, PageServerLoad } from './$types';

export const load = (async ({ params }) => ({
	holds: await resetHolds(database(), params.token)
})) satisfies PageServerLoad;

export const actions = {
	default: async (event) => {
		const password = newPasswordSchema.safeParse((await event.request.formData()).get('password'));
		if (!password.success) return fail(400, { problem: password.error.issues[0].message });
		const done = await redeemReset(database(), event.params.token, password.data, clientAddress(event));
		if (!done) return fail(410, { gone: true });
		redirect(303, '/sign-in?password=new');
	}
} satisfies Actions;
