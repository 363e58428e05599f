import { fail } from '@sveltejs/kit';
import { z } from 'zod';
import { focusStateSchema } from '$lib/schemas/focus';
import { publicIdSchema } from '$lib/schemas/views';
import { loadFocusList } from '$lib/server/services/focus';
import { setFocusState } from '$lib/server/services/focusEdit';
import { signedIn } from '../signedIn';
import type { Actions, PageServerLoad } from './$types';

const changeSchema = z.object({ focus: publicIdSchema, state: focusStateSchema });

export const load = (async ({ locals, url }) => ({
	list: await loadFocusList(signedIn(locals), url.searchParams.get('of') ?? undefined)
})) satisfies PageServerLoad;

export const actions = {
	state: async ({ locals, request }) => {
		const parsed = changeSchema.safeParse(Object.fromEntries(await request.formData()));
		if (!parsed.success) return fail(400, { problem: 'Say which focus, and what becomes of it' });
		await setFocusState(signedIn(locals), parsed.data.focus, parsed.data.state);
		return { changed: parsed.data.focus };
	}
} satisfies Actions;
