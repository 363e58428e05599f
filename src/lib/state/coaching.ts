import { z } from 'zod';
import { problemSchema } from '../schemas/api.ts';
import { debriefContentSchema, savedSchema, type DebriefContent } from '../schemas/debrief.ts';
import type { SaveOutcome } from './DebriefDraft.svelte.ts';

const conflictSchema = z.object({ conflict: z.object({ revision: z.number(), theirs: debriefContentSchema }) });
const keptSchema = z.object({ revision: z.number().int(), content: debriefContentSchema });

/** Saves a draft through the API. */
export function saveDraftOf(id: string) {
	return async (revision: number, content: DebriefContent): Promise<SaveOutcome> => {
		let response: Response;
		try {
			response = await fetch(`/api/v1/debriefs/${id}`, {
				method: 'PUT',
				headers: { 'content-type': 'application/json', accept: 'application/json' },
				body: JSON.stringify({ revision, content })
			});
		} catch {
			return { kind: 'unreached' };
		}
		const answer: unknown = await response.json().catch(() => null);
		if (response.ok) return { kind: 'saved', revision: savedSchema.parse(answer).revision };
		const conflict = conflictSchema.safeParse(answer);
		if (response.status === 409 && conflict.success) return { kind: 'conflict', ...conflict.data.conflict };
		if (response.status >= 500 || response.status === 429) return { kind: 'unreached' };
		const problem = problemSchema.safeParse(answer);
		const { detail, remedy } = problem.success ? problem.data : { detail: 'it was not taken', remedy: undefined };
		return { kind: 'refused', message: [detail, remedy].filter(Boolean).join('. ') };
	};
}

/** What the browser kept of a draft; null for what is none. */
export function readKept(kept: unknown): { revision: number; content: DebriefContent } | null {
	const parsed = keptSchema.safeParse(kept);
	return parsed.success ? parsed.data : null;
}
