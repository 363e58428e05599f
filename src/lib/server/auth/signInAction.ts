import { AuthError } from '@auth/sveltekit';
import { fail, isRedirect, redirect, type ActionFailure, type RequestEvent } from '@sveltejs/kit';
import { signIn, signOut } from './auth.ts';

export interface SignInFailure {
	code: 'wrong' | 'throttled' | 'unavailable';
	/** as typed, so that the form can show it again */
	email: string;
}

/**
 * The action of the sign-in page. Fields: `email`, `password`, and `redirectTo`, a path on this host.
 *
 * @returns a failure for the form; on success it throws the redirect (303), as actions do
 */
export async function signInAction(event: RequestEvent): Promise<ActionFailure<SignInFailure>> {
	const form = await event.request.clone().formData();
	const email = String(form.get('email') ?? '').slice(0, 254);
	try {
		await signIn(withProvider(event, form));
		return fail(503, { code: 'unavailable', email });
	} catch (outcome) {
		if (isRedirect(outcome)) redirect(303, outcome.location);
		if (!(outcome instanceof AuthError)) throw outcome;
		const code = 'code' in outcome ? outcome.code : null;
		if (code === 'throttled') return fail(429, { code, email });
		if (code === 'wrong') return fail(401, { code, email });
		return fail(503, { code: 'unavailable', email });
	}
}

/** The action of the sign-out page: the session's row is revoked, its cookie cleared, then 303 to the first page. */
export async function signOutAction(event: RequestEvent): Promise<never> {
	try {
		await signOut(event);
	} catch (outcome) {
		if (!isRedirect(outcome)) throw outcome;
	}
	redirect(303, '/');
}

/** Auth.js reads the provider from the form; a page with one provider need not name it. */
function withProvider(event: RequestEvent, form: FormData): RequestEvent {
	const body = new FormData();
	for (const name of ['email', 'password', 'redirectTo']) body.set(name, String(form.get(name) ?? ''));
	if (!body.get('redirectTo')) body.set('redirectTo', '/notebook');
	body.set('providerId', 'credentials');
	const headers = new Headers(event.request.headers);
	// The boundary of the new body is written by Request itself.
	headers.delete('content-type');
	headers.delete('content-length');
	const request = new Request(event.request.url, { method: 'POST', headers, body });
	return Object.create(event, { request: { value: request } }) as RequestEvent;
}
