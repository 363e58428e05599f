import { z } from 'zod';
import { RequestProblem } from './problem.ts';

/**
 * The query of a request, checked.
 *
 * @throws {RequestProblem} 400 `invalid_input`, naming each field
 */
export function readQuery<Schema extends z.ZodType>(url: URL, schema: Schema): z.output<Schema> {
	return check(Object.fromEntries(url.searchParams), schema);
}

/**
 * The JSON body of a request, checked. Its size was limited before it got here.
 *
 * @throws {RequestProblem} 400 `invalid_input`
 */
export async function readJson<Schema extends z.ZodType>(request: Request, schema: Schema): Promise<z.output<Schema>> {
	let body: unknown;
	try {
		body = await request.json();
	} catch {
		throw new RequestProblem(400, 'invalid_input', 'the request requires a body of JSON');
	}
	return check(body, schema);
}

function check<Schema extends z.ZodType>(input: unknown, schema: Schema): z.output<Schema> {
	const parsed = schema.safeParse(input);
	if (parsed.success) return parsed.data;
	const issues: Record<string, string[]> = {};
	for (const issue of parsed.error.issues) {
		const field = issue.path.join('.') || 'request';
		(issues[field] ??= []).push(issue.message);
	}
	throw new RequestProblem(
		400,
		'invalid_input',
		`the request requires other values for ${Object.keys(issues).join(', ')}`,
		{ issues }
	);
}
