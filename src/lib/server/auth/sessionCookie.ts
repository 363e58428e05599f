import { decode } from '@auth/core/jwt';
import type { RequestEvent } from '@sveltejs/kit';
import { z } from 'zod';
import { environment } from '../environment.ts';

type EventWithCookies = Pick<RequestEvent, 'cookies' | 'url'>;

/** With TLS the browser itself guards the cookie against other hosts and plain connections. */
export function sessionCookieName(url: URL): string {
	return url.protocol === 'https:' ? '__Host-kerbnote-session' : 'kerbnote-session';
}

/** What the signed cookie carries: the value whose hash a row of `sign_in_sessions` holds. */
export const sessionTokenSchema = z.object({ sid: z.string().min(20) });

/**
 * The session's secret out of the request's cookie, or null without one or with one that was not signed here. Says nothing
 * about whether the session still holds.
 */
export async function readSessionCookie(event: EventWithCookies): Promise<string | null> {
	const name = sessionCookieName(event.url);
	const token = event.cookies.get(name);
	if (!token) return null;
	try {
		const payload = await decode({ token, secret: environment().AUTH_SECRET, salt: name });
		return sessionTokenSchema.parse(payload).sid;
	} catch {
		// A foreign, broken or outdated cookie is no cookie.
		return null;
	}
}
