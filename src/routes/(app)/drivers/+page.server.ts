import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { inviteInputSchema } from '$lib/schemas/invitations';
import { RequestProblem } from '$lib/server/http/problem';
import { revokeGrant } from '$lib/server/services/invitations/grants';
import { loadDrivers } from '$lib/server/services/invitations/loadDrivers';
import { invite, sendAgain, withdraw } from '$lib/server/services/invitations/writeInvitation';
import { signedIn } from '../signedIn';
import type { Actions, PageServerLoad } from './$types';

export const load = (async ({ locals }) => ({ view: await loadDrivers(signedIn(locals)) })) satisfies PageServerLoad;

export const actions = {
	invite: async ({ locals, request }) => {
		const viewer = signedIn(locals);
		const form = Object.fromEntries(await request.formData());
		const kept = { email: String(form.email ?? ''), note: String(form.note ?? '') };
		const parsed = inviteInputSchema.safeParse(form);
		if (!parsed.success) {
			const issues: Record<string, string[] | undefined> = z.flattenError(parsed.error).fieldErrors;
			return fail(400, { issues, kept });
		}
		try {
			await invite(viewer, parsed.data);
		} catch (error) {
			if (!(error instanceof RequestProblem)) throw error;
			return fail(error.status, { problem: `${error.message}.`, kept });
		}
		return { invited: parsed.data.email };
	},

	again: async ({ locals, request }) => {
		try {
			await sendAgain(signedIn(locals), String((await request.formData()).get('id')));
		} catch (error) {
			if (!(error instanceof RequestProblem)) throw error;
			return fail(error.status, { problem: `${error.message}.` });
		}
		redirect(303, '/drivers');
	},

	withdraw: async ({ locals, request }) => {
		await withdraw(signedIn(locals), String((await request.formData()).get('id')));
		redirect(303, '/drivers');
	},

	revoke: async ({ locals, request }) => {
		await revokeGrant(signedIn(locals), String((await request.formData()).get('id')));
		redirect(303, '/drivers');
	}
} satisfies Actions;
