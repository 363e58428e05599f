import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson, readQuery } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { notesQuerySchema, zoneNoteInputSchema } from '$lib/schemas/zoneNote';
import { loadNotes } from '$lib/server/services/zoneNotes';
import { writeNote } from '$lib/server/services/zoneNotesEdit';
import type { RequestEvent } from './$types';

/** Notes on a layout, in its order. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	const notes = await loadNotes(viewer, readQuery(event.url, notesQuerySchema));
	return jsonResponse(JSON.stringify({ notes }));
});

/** Writes a note. */
export const POST = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	return jsonResponse(JSON.stringify(await writeNote(viewer, await readJson(event.request, zoneNoteInputSchema))), 201);
});
