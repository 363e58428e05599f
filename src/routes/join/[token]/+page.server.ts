import { fail, redirect, type RequestEvent } from '@sveltejs/kit';
import { z } from 'zod';
import { accountInputSchema, seesSchema } from '$lib/schemas/invitations';
import type { Viewer } from '$lib/server/access/viewer';
import { signIn } from '$lib/server/auth/auth';
import { newPasswordSchema } from '$lib/server/auth/newPassword';
import { database } from '$lib/server/db/database';
import { clientAddress } from '$lib/server/http/clientAddress';
import { RequestProblem } from '$lib/server/http/problem';
import { acceptInvitation, declineInvitation } from '$lib/server/services/invitations/answerInvitation';
import {
	agreeAsGuardian,
	joinAsGuardian,
	refuseAsGuardian,
	viewGuardianRequest
} from '$lib/server/services/invitations/guardianRequests';
import { joinByInvitation } from '$lib/server/services/invitations/joinByInvitation';
import { loadCare } from '$lib/server/services/invitations/loadCare';
import { viewInvitation } from '$lib/server/services/invitations/openInvitation';
import { listShareOptions } from '$lib/server/services/invitations/shareOptions';
import type { Actions, PageServerLoad } from './$types';

export const load = (async ({ locals: { viewer }, params: { token } }) => {
	const db = database();
	const [invitation, request] = await Promise.all([viewInvitation(db, token), viewGuardianRequest(db, token)]);
	return {
		invitation,
		request,
		options: viewer && invitation ? await listShareOptions(db, viewer) : [],
		minors: viewer && invitation ? await loadCare(db, viewer) : []
	};
}) satisfies PageServerLoad;

/** Who answers with an account signs in first, and comes back. */
function answering({ locals, url }: Pick<RequestEvent, 'locals' | 'url'>): Viewer {
	return locals.viewer ?? redirect(303, `/sign-in?redirectTo=${encodeURIComponent(url.pathname)}`);
}

/** What the services refuse with a sentence is shown by the form; all else is a fault. */
async function say<T>(work: () => Promise<T>) {
	try {
		return { done: await work() };
	} catch (error) {
		if (!(error instanceof RequestProblem)) throw error;
		return { refused: fail(error.status, { problem: `${error.message}.` }) };
	}
}

export const actions = {
	/** a newcomer makes an account and accepts with it */
	join: async (event) => {
		// signIn reads the body too, and is asked last.
		const form = Object.fromEntries(await event.request.clone().formData());
		const account = accountInputSchema.safeParse(form);
		const password = newPasswordSchema.safeParse(form.password);
		const kept = {
			name: String(form.name ?? ''),
			age: String(form.age ?? ''),
			guardianEmail: String(form.guardianEmail ?? '')
		};
		if (!account.success || !password.success) {
			const issues: Record<string, string[] | undefined> = {
				...(account.success ? {} : z.flattenError(account.error).fieldErrors),
				...(password.success ? {} : { password: [password.error.issues[0].message] })
			};
			return fail(400, { issues, kept });
		}
		const address = clientAddress(event) ?? 'unknown';
		const answer = await say(() =>
			joinByInvitation(database(), event.params.token, account.data, password.data, address)
		);
		if (answer.refused) return answer.refused;
		if (answer.done === 'waiting') return { waiting: account.data.guardianEmail };
		await signIn(event);
	},

	accept: async ({ locals, params, request, url }) => {
		const viewer = answering({ locals, url });
		const form = await request.formData();
		const sees = seesSchema.safeParse(form.get('sees'));
		if (!sees.success) return fail(400, { problem: 'Choose what they may see.' });
		const of = form.get('of');
		const answer = await say(() =>
			acceptInvitation(viewer, params.token, sees.data, typeof of === 'string' && of !== '' ? of : undefined)
		);
		if (answer.refused) return answer.refused;
		if (answer.done === 'waiting') return { waiting: 'your guardian' };
		redirect(303, '/drivers');
	},

	decline: async ({ locals, params }) => {
		const answer = await say(() => declineInvitation(database(), params.token, locals.viewer?.personId ?? null));
		return answer.refused ?? { declined: true };
	},

	/** a guardian without an account makes one and agrees */
	guard: async (event) => {
		const form = Object.fromEntries(await event.request.clone().formData());
		const account = z
			.object({
				name: accountInputSchema.shape.name,
				adult: z.literal('yes', 'A guardian is 18 or older'),
				password: newPasswordSchema
			})
			.safeParse(form);
		const kept = { name: String(form.name ?? ''), age: '', guardianEmail: '' };
		if (!account.success) {
			const issues: Record<string, string[] | undefined> = z.flattenError(account.error).fieldErrors;
			return fail(400, { issues, kept });
		}
		const address = clientAddress(event) ?? 'unknown';
		const answer = await say(() => joinAsGuardian(database(), event.params.token, account.data, address));
		if (answer.refused) return answer.refused;
		await signIn(event);
	},

	agree: async ({ locals, params, url }) => {
		const viewer = answering({ locals, url });
		const answer = await say(() => agreeAsGuardian(viewer, params.token));
		if (answer.refused) return answer.refused;
		redirect(303, '/drivers');
	},

	refuse: async ({ params }) => {
		const answer = await say(() => refuseAsGuardian(database(), params.token));
		return answer.refused ?? { declined: true };
	}
} satisfies Actions;
