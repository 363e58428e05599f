import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { publicIdSchema } from '$lib/schemas/views';
import { deleteRun, describeRun } from '$lib/server/services/editRun';
import { loadRun } from '$lib/server/services/loadRun';
import { nameLayout } from '$lib/server/services/nameLayout';
import { signedIn } from '../../signedIn';
import { readDescription, readNames } from './runForms';
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
	},

	/** What a person says of the run. */
	describe: async ({ locals, params, request }) => {
		const viewer = signedIn(locals);
		const { value, issues } = readDescription(await request.formData());
		if (value === null) return fail(400, { form: 'describe' as const, issues });
		await describeRun(viewer, params.run, value);
		return { form: 'describe' as const, saved: true };
	},

	/** Names of the circuit, its layout and its corners: for every run on it. */
	names: async ({ locals, params, request }) => {
		const viewer = signedIn(locals);
		const { value, issues } = readNames(await request.formData());
		if (value === null) return fail(400, { form: 'names' as const, issues });
		const { layout } = await loadRun(viewer, params.run);
		await nameLayout(viewer, layout.id, value);
		return { form: 'names' as const, saved: true };
	},

	delete: async ({ locals, params }) => {
		await deleteRun(signedIn(locals), params.run);
		redirect(303, '/notebook');
	}
} satisfies Actions;
