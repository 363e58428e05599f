import { error } from '@sveltejs/kit';
import type { ProblemCode } from '../../schemas/api.ts';

/** Ends the request with 409, in a page as in the API. */
export function conflict(code: ProblemCode, message: string): never {
	error(409, { message, code, errorId: '' });
}
