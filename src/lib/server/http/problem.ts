import { isHttpError } from '@sveltejs/kit';
import { KerbnoteError } from '../../schemas/kerbnoteError.ts';
import { problemCodeSchema, type Problem, type ProblemCode } from '../../schemas/api.ts';

/** What can stop a request, other than a bug: thrown by the doors of the API, answered as `application/problem+json`. */
export class RequestProblem extends Error {
	constructor(
		readonly status: number,
		readonly code: ProblemCode,
		message: string,
		readonly more: Pick<Problem, 'remedy' | 'issues' | 'conflict'> & { headers?: Record<string, string> } = {}
	) {
		super(message);
		this.name = 'RequestProblem';
	}
}

const TITLES: Record<number, string> = {
	400: 'Bad request',
	401: 'Sign in first',
	403: 'Not allowed',
	404: 'Not found',
	405: 'Method not allowed',
	409: 'Conflict',
	411: 'Length required',
	413: 'Too large',
	422: 'Cannot be read',
	429: 'Too many requests',
	500: 'Something broke',
	503: 'Not available now'
};

/** RFC 9457. */
export function problemResponse(
	problem: Omit<Problem, 'type' | 'title'>,
	headers: Record<string, string> = {}
): Response {
	const body: Problem = { type: `/method#${problem.code}`, title: TITLES[problem.status] ?? 'Problem', ...problem };
	return new Response(JSON.stringify(body), {
		status: problem.status,
		headers: { 'content-type': 'application/problem+json', 'cache-control': 'no-store', ...headers }
	});
}

/** The answer to a known problem, or null for what is a bug and belongs to `handleError`. */
export function problemOf(thrown: unknown): Response | null {
	if (thrown instanceof RequestProblem) {
		const { headers, ...more } = thrown.more;
		return problemResponse({ status: thrown.status, code: thrown.code, detail: thrown.message, ...more }, headers);
	}
	if (thrown instanceof KerbnoteError) {
		const { code, message, row, column, remedy } = thrown;
		return problemResponse({ status: code === 'internal' ? 500 : 422, code, detail: message, row, column, remedy });
	}
	if (isHttpError(thrown) && thrown.status < 500) {
		const { code, message } = thrown.body;
		const known = problemCodeSchema.safeParse(code);
		return problemResponse({
			status: thrown.status,
			code: known.success ? known.data : 'invalid_input',
			detail: message
		});
	}
	return null;
}
