import { apiRoute } from '$lib/server/http/apiRoute';
import { jsonResponse } from '$lib/server/http/json';
import { readJson } from '$lib/server/http/readInput';
import { requireViewer } from '$lib/server/http/requireViewer';
import { zoneNoteChangeSchema } from '$lib/schemas/zoneNote';
import { loadNote } from '$lib/server/services/zoneNotes';
import { changeNote, deleteNote } from '$lib/server/services/zoneNotesEdit';
import type { RequestEvent } from './$types';

/** One note with its answers and its history. */
export const GET = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'laps:read');
	return jsonResponse(JSON.stringify(await loadNote(viewer, event.params.note)));
});

/** Changes a note; who wrote on an older revision is told, with both texts. */
export const PATCH = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	const change = await readJson(event.request, zoneNoteChangeSchema);
	return jsonResponse(JSON.stringify(await changeNote(viewer, event.params.note, change)));
});

/** Takes a note out of sight. */
export const DELETE = apiRoute<RequestEvent>(async (event) => {
	const viewer = requireViewer(event, 'runs:write');
	await deleteNote(viewer, event.params.note);
	return new Response(null, { status: 204 });
});
