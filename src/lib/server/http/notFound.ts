import { error } from '@sveltejs/kit';

/** Refused and absent read the same, so that an id tells nobody whether it exists. */
export const NOT_FOUND_TEXT = 'Nothing is here, or it is not yours to see.';

/** Ends the request with 404, in a page as in the API. */
export function notFound(): never {
	error(404, { message: NOT_FOUND_TEXT, code: 'not_found', errorId: '' });
}
