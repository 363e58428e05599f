import { redirect, type Handle, type RequestEvent } from '@sveltejs/kit';
import { findViewerBySession, findViewerByToken } from '../access/findViewer.ts';
import type { Viewer } from '../access/viewer.ts';
import { readSessionCookie, sessionCookieName } from '../auth/sessionCookie.ts';
import { database } from '../db/database.ts';
import { hasBearer } from './guardRequest.ts';

/**
 * Finds out who asks, once per request, and keeps nobody out but from the pages of the app: those lead to the sign-in and
 * back. What a viewer may see is decided where the data are read.
 */
export const findViewer: Handle = async ({ event, resolve }) => {
	event.locals.viewer = await whoAsks(event);
	if (!event.locals.viewer && !hasBearer(event) && (await readSessionCookie(event))) {
		event.cookies.delete(sessionCookieName(event.url), { path: '/' });
	}
	if (!event.locals.viewer && event.route.id?.startsWith('/(app)')) {
		const here = event.url.pathname + event.url.search;
		redirect(303, `/sign-in?redirectTo=${encodeURIComponent(here)}`);
	}
	return await resolve(event);
};

/** The viewer by the request's cookie or token, looked up anew; null where neither holds. */
export async function whoAsks(event: RequestEvent): Promise<Viewer | null> {
	if (hasBearer(event)) {
		// A token opens the API alone; a page's forms are not for programs.
		if (!event.url.pathname.startsWith('/api/')) return null;
		const token = (event.request.headers.get('authorization') ?? '').slice('bearer '.length).trim();
		return await findViewerByToken(database(), token);
	}
	const secret = await readSessionCookie(event);
	if (!secret) return null;
	return await findViewerBySession(database(), secret);
}
