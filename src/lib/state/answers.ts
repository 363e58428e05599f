import type { z } from 'zod';
import { problemSchema } from '../schemas/api.ts';
import { LINE_BROKEN, UploadFault, type UploadProblem } from './transfer.ts';

/** Statuses after which the same may simply be asked again. */
const PASSING = new Set([0, 408, 423, 429, 502, 503, 504]);

/** What a person reads of an answer that is a refusal: the server's words where it spoke, else that the line broke. */
export function problemOfAnswer(status: number, text: string): UploadProblem {
	const again = PASSING.has(status);
	const problem = problemSchema.safeParse(parseJson(text));
	if (!problem.success) return LINE_BROKEN;
	const { detail, remedy } = problem.data;
	return { message: detail, remedy: remedy ?? (again ? 'Try again in a while' : ''), again };
}

/**
 * Asks the API and checks the answer.
 *
 * @param schema of the body; null where the answer has none
 * @throws {UploadFault} with what the server said, or that the line broke
 */
export async function askApi<Schema extends z.ZodType>(
	path: string,
	init: Omit<RequestInit, 'body'> & { json?: unknown },
	schema: Schema
): Promise<z.infer<Schema>>;
export async function askApi(
	path: string,
	init: Omit<RequestInit, 'body'> & { json?: unknown },
	schema: null
): Promise<null>;
export async function askApi(
	path: string,
	{ json, headers, ...init }: Omit<RequestInit, 'body'> & { json?: unknown },
	schema: z.ZodType | null
): Promise<unknown> {
	let response: Response;
	try {
		response = await fetch(path, {
			...init,
			headers: {
				accept: 'application/json',
				...(json === undefined ? {} : { 'content-type': 'application/json' }),
				...headers
			},
			body: json === undefined ? undefined : JSON.stringify(json)
		});
	} catch (error) {
		if (init.signal?.aborted) throw error;
		throw new UploadFault(LINE_BROKEN);
	}
	const text = await response.text();
	if (!response.ok) throw new UploadFault(problemOfAnswer(response.status, text));
	return schema === null ? null : schema.parse(parseJson(text));
}

function parseJson(text: string): unknown {
	try {
		return JSON.parse(text);
	} catch {
		return null;
	}
}
