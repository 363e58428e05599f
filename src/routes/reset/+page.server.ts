import { fail } from '@sveltejs/kit';
import { database } from '$lib/server/db/database';
import { clientAddress } from '$lib/server/http/clientAddress';
import { askForReset, RESET_VALID_MINUTES } from '$lib/server/services/resetByMail';
import type { Actions } from './$types';

export const actions = {
	default: async (event) => {
		const email = String((await event.request.formData()).get('email') ?? '').slice(0, 320);
		const answer = await askForReset(database(), email, clientAddress(event) ?? 'unknown');
		if (answer === 'asked') return { asked: true as const, email, validMinutes: RESET_VALID_MINUTES };
		return fail(answer === 'throttled' ? 429 : 400, { code: answer, email });
	}
} satisfies Actions;
