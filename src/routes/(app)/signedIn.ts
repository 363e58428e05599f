import { error } from '@sveltejs/kit';
import type { Viewer } from '$lib/server/access/viewer';

/** The viewer of a page of the app. The hook has already sent everybody else to the sign-in; this only says so to the types. */
export function signedIn(locals: App.Locals): Viewer {
	if (locals.viewer === null) error(401, { message: 'Sign in first', code: 'sign_in_required', errorId: '' });
	return locals.viewer;
}
