import { fail, redirect, type RequestEvent } from '@sveltejs/kit';
import type { MappingInput } from '$lib/schemas/api';
import type { UploadView } from '$lib/schemas/views';
import type { Viewer } from '$lib/server/access/viewer';
import { RequestProblem } from '$lib/server/http/problem';
import { loadUpload } from '$lib/server/services/loadUpload';
import { analyseAgain, changeMapping, forgetMapping } from '$lib/server/upload/changeMapping';
import { signedIn } from '../../signedIn';
import {
	lapSourceSchema,
	mappingForLaps,
	mappingFromAnswer,
	mappingFromForm,
	rememberFromForm
} from '../columnChoices';
import type { Actions, PageServerLoad } from './$types';

export const load = (async ({ locals, params, url, depends }) => {
	depends('app:upload');
	const upload = await loadUpload(signedIn(locals), params.upload);
	// An upload of a file that was here before answers with the earlier one; its page stands at that one's address.
	if (upload.id !== params.upload) redirect(303, `/upload/${upload.id}?before`);
	return { upload, wasHereBefore: url.searchParams.has('before') };
}) satisfies PageServerLoad;

type Event = Pick<RequestEvent, 'locals' | 'request' | 'url'> & { params: { upload: string } };

/** Changes how the file is read, or says why not. */
async function answer(
	{ locals, params, request, url }: Event,
	read: (
		fields: ReadonlyMap<string, string>,
		upload: UploadView
	) => { mapping: MappingInput['mapping']; problem: null } | { problem: string }
) {
	const viewer = signedIn(locals);
	const [form, upload] = await Promise.all([request.formData(), loadUpload(viewer, params.upload)]);
	const fields = new Map([...form].flatMap(([name, value]) => (typeof value === 'string' ? [[name, value]] : [])));
	const answered = read(fields, upload);
	if (answered.problem !== null) return fail(400, { problem: answered.problem });
	try {
		await keep(viewer, params.upload, { mapping: answered.mapping, ...rememberFromForm(fields) });
	} catch (error) {
		if (!(error instanceof RequestProblem)) throw error;
		return fail(error.status, { problem: `${error.message}.` });
	}
	redirect(303, url.pathname);
}

/** A file without a header has nothing by which another would be known: its answer holds for it alone. */
async function keep(viewer: Viewer, id: string, { mapping, ...remember }: MappingInput) {
	try {
		await changeMapping(viewer, id, mapping, remember);
	} catch (error) {
		if (!(error instanceof RequestProblem) || remember.remember === 'no' || error.status !== 409) throw error;
		await changeMapping(viewer, id, mapping);
	}
}

export const actions = {
	/** Reads the kept file again with the columns that a person chose. */
	columns: async (event) =>
		await answer(event, (fields, { understood }) => mappingFromForm(fields, understood?.columns ?? [])),

	/** Reads it with what a person said to the question that it raised. */
	answer: async (event) =>
		await answer(event, (fields, { error }) =>
			error?.question ? mappingFromAnswer(fields, error.question) : { problem: 'There is no question any more.' }
		),

	/** Reads it with laps counted another way. */
	laps: async (event) =>
		await answer(event, (fields, { understood, mapping }) => {
			const source = lapSourceSchema.safeParse(fields.get('source'));
			return source.success
				? { mapping: mappingForLaps(source.data, understood?.columns ?? [], mapping), problem: null }
				: { problem: 'Choose what laps are counted by.' };
		}),

	/** Forgets what is kept for files with this header; this one stays as it was read. */
	forget: async ({ locals, params, url }) => {
		await forgetMapping(signedIn(locals), params.upload);
		redirect(303, url.pathname);
	},

	/** Reads the kept file anew, by what the product knows today. */
	again: async ({ locals, params, url }) => {
		try {
			await analyseAgain(signedIn(locals), params.upload);
		} catch (error) {
			if (!(error instanceof RequestProblem)) throw error;
			return fail(error.status, { problem: `${error.message}.` });
		}
		redirect(303, url.pathname);
	}
} satisfies Actions;
