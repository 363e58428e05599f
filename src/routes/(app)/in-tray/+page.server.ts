import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { publicIdSchema } from '$lib/schemas/views';
import { RequestProblem } from '$lib/server/http/problem';
import { startDebrief } from '$lib/server/services/debriefsEdit';
import { loadInTray, promiseDebrief, setTrayClosed } from '$lib/server/services/inTray';
import { signedIn } from '../signedIn';
import type { Actions, PageServerLoad } from './$types';

const runSchema = z.object({ run: publicIdSchema });
const promiseSchema = runSchema.extend({ by: z.iso.date() });

export const load = (async ({ locals }) => ({ items: await loadInTray(signedIn(locals)) })) satisfies PageServerLoad;

export const actions = {
	close: async ({ locals, request }) => {
		const parsed = runSchema.safeParse(Object.fromEntries(await request.formData()));
		if (!parsed.success) return fail(400, { problem: 'Say which run' });
		await setTrayClosed(signedIn(locals), parsed.data.run, true);
		return { closed: parsed.data.run };
	},

	reopen: async ({ locals, request }) => {
		const parsed = runSchema.safeParse(Object.fromEntries(await request.formData()));
		if (!parsed.success) return fail(400, { problem: 'Say which run' });
		await setTrayClosed(signedIn(locals), parsed.data.run, false);
		return { reopened: parsed.data.run };
	},

	promise: async ({ locals, request }) => {
		const parsed = promiseSchema.safeParse(Object.fromEntries(await request.formData()));
		if (!parsed.success) return fail(400, { problem: 'Say a day' });
		await promiseDebrief(signedIn(locals), parsed.data.run, new Date(`${parsed.data.by}T20:00:00Z`));
		return { promised: parsed.data.run };
	},

	draft: async ({ locals, request }) => {
		const parsed = runSchema.safeParse(Object.fromEntries(await request.formData()));
		if (!parsed.success) return fail(400, { problem: 'Say which run' });
		let id: string;
		try {
			({ id } = await startDebrief(signedIn(locals), parsed.data));
		} catch (error) {
			if (!(error instanceof RequestProblem)) throw error;
			return fail(error.status, { problem: `${error.message}. ${error.more.remedy ?? ''}` });
		}
		redirect(303, `/debriefs/${id}`);
	}
} satisfies Actions;
