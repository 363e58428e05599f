import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { intakeAnswersSchema } from '$lib/schemas/intake';
import { getKeptPerson, listIntakes, saveIntake } from '$lib/server/services/intake';
import { signedIn } from '../../../signedIn';
import type { Actions, PageServerLoad } from './$types';

export const load = (async ({ locals, params }) => {
	const viewer = signedIn(locals);
	const driver = await getKeptPerson(viewer, params.driver);
	const [newest] = await listIntakes(viewer, params.driver);
	return {
		driver,
		own: driver.id === viewer.publicId,
		answers: newest?.answers ?? intakeAnswersSchema.parse({}),
		version: newest?.version ?? 0
	};
}) satisfies PageServerLoad;

export const actions = {
	default: async ({ locals, params, request }) => {
		const viewer = signedIn(locals);
		await getKeptPerson(viewer, params.driver);
		const form = await request.formData();
		const parsed = intakeAnswersSchema.safeParse({ ...Object.fromEntries(form), aids: form.getAll('aids') });
		if (!parsed.success) {
			const issues: Record<string, string[] | undefined> = z.flattenError(parsed.error).fieldErrors;
			return fail(400, { issues });
		}
		const since = z.coerce.number().int().min(0).catch(0).parse(form.get('version'));
		await saveIntake(viewer, params.driver, parsed.data, since);
		redirect(303, `/drivers/${params.driver}`);
	}
} satisfies Actions;
