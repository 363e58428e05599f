import { fail, redirect } from '@sveltejs/kit';
import { RequestProblem } from '$lib/server/http/problem';
import { loadUpload } from '$lib/server/services/loadUpload';
import { changeMapping } from '$lib/server/upload/changeMapping';
import { signedIn } from '../../signedIn';
import { mappingFromForm } from '../columnChoices';
import type { Actions, PageServerLoad } from './$types';

export const load = (async ({ locals, params, depends }) => {
	depends('app:upload');
	return { upload: await loadUpload(signedIn(locals), params.upload) };
}) satisfies PageServerLoad;

export const actions = {
	/** Reads the kept file again with the columns that a person chose. */
	columns: async ({ locals, params, request, url }) => {
		const viewer = signedIn(locals);
		const [form, upload] = await Promise.all([request.formData(), loadUpload(viewer, params.upload)]);
		const fields = new Map([...form].flatMap(([name, value]) => (typeof value === 'string' ? [[name, value]] : [])));
		const { mapping, problem } = mappingFromForm(fields, upload.understood?.columns ?? []);
		if (mapping === null) return fail(400, { problem });
		try {
			await changeMapping(viewer, params.upload, mapping);
		} catch (error) {
			if (!(error instanceof RequestProblem)) throw error;
			return fail(error.status, { problem: `${error.message}.` });
		}
		redirect(303, url.pathname);
	}
} satisfies Actions;
