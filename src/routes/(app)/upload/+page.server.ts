import { fail, redirect } from '@sveltejs/kit';
import { environment } from '$lib/server/environment';
import { RequestProblem } from '$lib/server/http/problem';
import { loadUploads } from '$lib/server/services/loadUpload';
import { receiveUpload } from '$lib/server/upload/receiveUpload';
import { signedIn } from '../signedIn';
import type { Actions, PageServerLoad } from './$types';

export const load = (async ({ locals, url, depends }) => {
	depends('app:uploads');
	return {
		limitBytes: environment().KERBNOTE_UPLOAD_LIMIT_BYTES,
		uploads: await loadUploads(signedIn(locals)),
		/** where a script finds this server */
		origin: url.origin
	};
}) satisfies PageServerLoad;

export const actions = {
	/** Without script the browser sends one file as a form, which is read into memory first: for small files only. */
	default: async ({ locals, request }) => {
		const viewer = signedIn(locals);
		const file = (await request.formData()).get('file');
		if (!(file instanceof File) || file.size === 0) {
			return fail(400, { message: 'No file was chosen', remedy: 'Choose a file first' });
		}
		let id: string;
		try {
			({ id } = await receiveUpload(viewer, file.name, chunksOf(file)));
		} catch (error) {
			if (!(error instanceof RequestProblem)) throw error;
			return fail(error.status, { message: error.message, remedy: error.more.remedy ?? 'Try again' });
		}
		redirect(303, `/upload/${id}`);
	}
} satisfies Actions;

async function* chunksOf(file: File): AsyncIterable<Uint8Array> {
	const reader = file.stream().getReader();
	for (let chunk = await reader.read(); !chunk.done; chunk = await reader.read()) yield chunk.value;
}
