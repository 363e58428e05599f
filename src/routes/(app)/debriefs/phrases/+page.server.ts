import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { phraseInputSchema } from '$lib/schemas/debrief';
import { dropPhrase, keepPhrase, listPhrases } from '$lib/server/services/debriefPhrases';
import { signedIn } from '../../signedIn';
import type { Actions, PageServerLoad } from './$types';

export const load = (async ({ locals }) => ({ phrases: await listPhrases(signedIn(locals)) })) satisfies PageServerLoad;

export const actions = {
	keep: async ({ locals, request }) => {
		const form = await request.formData();
		const code = form.get('code');
		const parsed = phraseInputSchema.safeParse({ code: code === '' ? null : code, body: form.get('body') });
		if (!parsed.success) return fail(400, { issues: z.flattenError(parsed.error).fieldErrors });
		await keepPhrase(signedIn(locals), parsed.data);
		redirect(303, '/debriefs/phrases');
	},

	drop: async ({ locals, request }) => {
		await dropPhrase(signedIn(locals), String((await request.formData()).get('id')));
		redirect(303, '/debriefs/phrases');
	}
} satisfies Actions;
