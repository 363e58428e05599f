import { fail } from '@sveltejs/kit';
import { z } from 'zod';
import { runDescriptionSchema } from '$lib/schemas/api';
import { publicIdSchema } from '$lib/schemas/views';
import { describeRun } from '$lib/server/services/editRun';
import { loadRuns } from '$lib/server/services/loadRuns';
import { loadRunsToCheck } from '$lib/server/services/loadRunsToCheck';
import { signedIn } from '../../signedIn';
import { momentFromField } from './moments';
import type { Actions, PageServerLoad } from './$types';

/** Of the newest runs, where nobody says which ones. */
const NEWEST = 50;

export const load = (async ({ locals, url, depends }) => {
	depends('app:runs-check');
	const viewer = signedIn(locals);
	const named = url.searchParams.get('runs');
	const ids =
		named === null
			? (await loadRuns(viewer, { limit: NEWEST })).runs.filter(({ own }) => own).map(({ id }) => id)
			: named.split(',');
	return { check: await loadRunsToCheck(viewer, ids) };
}) satisfies PageServerLoad;

const rowSchema = z.object({ id: publicIdSchema, startedAt: z.string(), layout: publicIdSchema, car: z.string() });

export const actions = {
	/** One row of the table, from a browser without script. */
	save: async ({ locals, request }) => {
		const viewer = signedIn(locals);
		const row = rowSchema.safeParse(Object.fromEntries(await request.formData()));
		if (!row.success) return fail(400, { problem: 'A row needs a circuit, and a date as 2026-05-14T16:05.' });
		const { id, startedAt, layout, car } = row.data;
		const { runs } = await loadRunsToCheck(viewer, [id]);
		const said = runDescriptionSchema.safeParse({
			startedAt: momentFromField(startedAt),
			car,
			// Another layout has the file read again: only where it really is another one.
			...(runs[0]?.layout.id === layout ? {} : { layout })
		});
		if (!said.success) return fail(400, { problem: said.error.issues[0].message });
		await describeRun(viewer, id, said.data);
		return { saved: id };
	}
} satisfies Actions;
