import { AuthError } from '@auth/core/errors';
import { fail, redirect } from '@sveltejs/kit';
import { CredentialsSignin } from '@auth/sveltekit';
import { ownPath, signIn } from '$lib/server/auth/auth';
import type { Actions, PageServerLoad } from './$types';

export const load = (async ({ parent, url }) => {
	const { viewer } = await parent();
	const to = ownPath(url.searchParams.get('redirectTo') ?? '/notebook', url.origin);
	if (viewer !== null) redirect(303, to);
	return { to, isPasswordNew: url.searchParams.get('password') === 'new' };
}) satisfies PageServerLoad;

export const actions = {
	default: async (event) => {
		// signIn reads the body; the address is kept, so that a person need not write it twice
		const email = String((await event.request.clone().formData()).get('email') ?? '');
		try {
			await signIn(event);
		} catch (error) {
			if (!(error instanceof AuthError)) throw error;
			const code = error instanceof CredentialsSignin ? error.code : 'unavailable';
			return fail(code === 'throttled' ? 429 : 401, { code, email });
		}
	}
} satisfies Actions;
