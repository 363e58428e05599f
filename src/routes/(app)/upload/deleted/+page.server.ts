import { fail, redirect } from '@sveltejs/kit';
import { publicIdSchema } from '$lib/schemas/views';
import { RequestProblem } from '$lib/server/http/problem';
import { restoreRun } from '$lib/server/services/editRun';
import { loadDeleted } from '$lib/server/services/loadDeleted';
import { deleteUpload, restoreUpload } from '$lib/server/upload/deleteUpload';
import { notFound } from '$lib/server/http/notFound';
import { signedIn } from '../../signedIn';
import type { Actions, PageServerLoad } from './$types';

export const load = (async ({ locals }) => ({
	deleted: await loadDeleted(signedIn(locals))
})) satisfies PageServerLoad;

async function idOf(request: Request): Promise<string> {
	const id = publicIdSchema.safeParse((await request.formData()).get('id'));
	return id.success ? id.data : notFound();
}

export const actions = {
	/** Takes an upload out of sight; where it went, it can be brought back. */
	deleteUpload: async ({ locals, request }) => {
		await deleteUpload(signedIn(locals), await idOf(request));
		redirect(303, '/upload/deleted');
	},

	restoreUpload: async ({ locals, request }) => {
		const viewer = signedIn(locals);
		const id = await idOf(request);
		try {
			await restoreUpload(viewer, id);
		} catch (error) {
			if (!(error instanceof RequestProblem) || error.status === 404) throw error;
			return fail(error.status, { id, problem: error.message, remedy: error.more.remedy ?? '' });
		}
		return { id, restored: true };
	},

	restoreRun: async ({ locals, request }) => {
		const id = await idOf(request);
		await restoreRun(signedIn(locals), id);
		return { id, restored: true };
	}
} satisfies Actions;
