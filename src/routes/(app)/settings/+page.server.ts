import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { profileInputSchema, tokenInputSchema } from '$lib/schemas/settings';
import { RequestProblem } from '$lib/server/http/problem';
import { makeToken, revokeToken } from '$lib/server/services/apiTokens';
import { changeProfile, endOtherSignIns, endSignIn } from '$lib/server/services/changeSettings';
import { loadSettings } from '$lib/server/services/loadSettings';
import { THEME_COOKIE } from '$lib/state/theme';
import { signedIn } from '../signedIn';
import type { Actions, PageServerLoad } from './$types';

const SECONDS_PER_YEAR = 31_536_000;

export const load = (async ({ locals }) => ({
	settings: await loadSettings(signedIn(locals))
})) satisfies PageServerLoad;

export const actions = {
	profile: async ({ locals, request, cookies }) => {
		const viewer = signedIn(locals);
		const parsed = profileInputSchema.safeParse(Object.fromEntries(await request.formData()));
		if (!parsed.success) {
			return fail(400, { form: 'profile' as const, issues: z.flattenError(parsed.error).fieldErrors });
		}
		await changeProfile(viewer, parsed.data);
		// After signing out the browser keeps the look that its person chose.
		cookies.set(THEME_COOKIE, parsed.data.theme, { path: '/', maxAge: SECONDS_PER_YEAR, sameSite: 'lax' });
		// The layout reads the viewer of this request: what was just written must be what it shows.
		locals.viewer = {
			...viewer,
			name: parsed.data.name,
			preferences: { ...viewer.preferences, theme: parsed.data.theme, speedUnit: parsed.data.speedUnit }
		};
		return { form: 'profile' as const, saved: true };
	},

	endSignIn: async ({ locals, request }) => {
		await endSignIn(signedIn(locals), String((await request.formData()).get('id')));
		redirect(303, '/settings');
	},

	endOthers: async ({ locals }) => {
		await endOtherSignIns(signedIn(locals));
		redirect(303, '/settings');
	},

	makeToken: async ({ locals, request }) => {
		const viewer = signedIn(locals);
		const form = await request.formData();
		const parsed = tokenInputSchema.safeParse({ ...Object.fromEntries(form), scopes: form.getAll('scopes') });
		if (!parsed.success) return fail(400, { form: 'token' as const, issues: z.flattenError(parsed.error).fieldErrors });
		try {
			return { form: 'token' as const, token: await makeToken(viewer, parsed.data) };
		} catch (error) {
			if (!(error instanceof RequestProblem)) throw error;
			return fail(error.status, { form: 'token' as const, problem: `${error.message}. ${error.more.remedy ?? ''}.` });
		}
	},

	revokeToken: async ({ locals, request }) => {
		await revokeToken(signedIn(locals), String((await request.formData()).get('id')));
		redirect(303, '/settings');
	}
} satisfies Actions;
