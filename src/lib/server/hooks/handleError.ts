import type { HandleServerError } from '@sveltejs/kit';
import { NOT_FOUND_TEXT } from '../http/notFound.ts';
import { reportFault } from '../http/reportFault.ts';

/** Logs a bug once, under an id that the person sees and can quote. */
export const handleError: HandleServerError = ({ error, event, status, message }) => {
	if (status === 404) return { message: NOT_FOUND_TEXT, code: 'not_found', errorId: '' };
	if (status < 500) return { message, code: 'invalid_input', errorId: '' };
	return { message: 'Something broke on our side.', code: 'internal', errorId: reportFault(error, event) };
};
