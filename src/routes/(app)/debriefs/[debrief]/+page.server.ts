import { z } from 'zod';
import { loadDebrief } from '$lib/server/services/debriefs';
import { previewLetter } from '$lib/server/services/debriefMail';
import { signedIn } from '../../signedIn';
import type { PageServerLoad } from './$types';

const asSchema = z.enum(['write', 'page', 'email', 'print']).catch('write');

export const load = (async ({ locals, params, url }) => {
	const viewer = signedIn(locals);
	const as = asSchema.parse(url.searchParams.get('as'));
	const view = await loadDebrief(viewer, params.debrief);
	return { view, as, letter: view.mayEdit && as === 'email' ? previewLetter(view) : null };
}) satisfies PageServerLoad;
