import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { publicIdSchema } from '$lib/schemas/views';
import { loadRun } from '$lib/server/services/loadRun';
import { signedIn } from '../../signedIn';
import type { Actions, PageServerLoad } from './$types';

const pairSchema = z.object({ lap: publicIdSchema, reference: publicIdSchema });

export const load = (async ({ locals, params }) => ({
	run: await loadRun(signedIn(locals), params.run)
})) satisfies PageServerLoad;

export const actions = {
	/** Leads to the comparison; whether the pair may be seen is decided there. */
	compare: async ({ request }) => {
		const parsed = pairSchema.safeParse(Object.fromEntries(await request.formData()));
		if (!parsed.success) return fail(400, { form: 'compare' as const, problem: 'Choose a lap and a reference.' });
		const { lap, reference } = parsed.data;
		if (lap === reference) {
			return fail(400, { form: 'compare' as const, problem: 'That is the same lap twice; choose another reference.' });
		}
		redirect(303, `/compare/${lap}/${reference}`);
	}
} satisfies Actions;
