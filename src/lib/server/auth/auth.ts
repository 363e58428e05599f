import { CredentialsSignin, type SvelteKitAuthConfig } from '@auth/sveltekit';
import { SvelteKitAuth } from '@auth/sveltekit';
import Credentials from '@auth/sveltekit/providers/credentials';
import type { RequestEvent } from '@sveltejs/kit';
import { recordAudit } from '../db/auditRepository.ts';
import { database } from '../db/database.ts';
import { environment } from '../environment.ts';
import { clientAddress } from '../http/clientAddress.ts';
import { faultOf, logger } from '../logger.ts';
import { checkCredentials } from './checkCredentials.ts';
import { readSessionCookie, sessionCookieName, sessionTokenSchema } from './sessionCookie.ts';
import { openSession, revokeSession, SESSION_DAYS, sessionHolds } from './sessions.ts';

/** Too many tries; the code reaches the form. */
class Throttled extends CredentialsSignin {
	override code = 'throttled';
}

/** Wrong password or no such account: one code for both. */
class WrongCredentials extends CredentialsSignin {
	override code = 'wrong';
}

const SECONDS_PER_DAY = 86_400;

/**
 * Auth.js with a password and sessions that can be taken back: the signed cookie carries a random value, a row of
 * `sign_in_sessions` holds its hash, and every use of the cookie asks for that row.
 */
export const { handle, signIn, signOut } = SvelteKitAuth(async (event) => configFor(event));

function configFor(event: RequestEvent): SvelteKitAuthConfig {
	const name = sessionCookieName(event.url);
	const secure = event.url.protocol === 'https:';
	return {
		basePath: '/auth',
		trustHost: true,
		secret: environment().AUTH_SECRET,
		session: { strategy: 'jwt', maxAge: SESSION_DAYS * SECONDS_PER_DAY },
		pages: { signIn: '/sign-in', signOut: '/sign-out', error: '/sign-in' },
		cookies: { sessionToken: { name, options: { httpOnly: true, sameSite: 'lax', path: '/', secure } } },
		providers: [
			Credentials({
				credentials: { email: { type: 'email' }, password: { type: 'password' } },
				authorize: (credentials) => authorise(event, credentials)
			})
		],
		callbacks: {
			jwt: async ({ token, user }) => {
				if (user?.id) return await openAt(event, Number(user.id));
				const parsed = sessionTokenSchema.safeParse(token);
				return parsed.success && (await sessionHolds(database(), parsed.data.sid)) ? token : null;
			},
			session: ({ session }) => ({ expires: session.expires }),
			// Only paths of our own: whoever follows a link to the sign-in never ends elsewhere.
			redirect: ({ url, baseUrl }) => ownPath(url, baseUrl)
		},
		events: {
			signOut: async (message) => {
				const parsed = sessionTokenSchema.safeParse('token' in message ? message.token : null);
				if (parsed.success) await revokeSession(database(), parsed.data.sid);
			}
		},
		logger: {
			error: (error) => {
				if (!(error instanceof CredentialsSignin)) logger.error({ ...faultOf(error) }, 'auth');
			},
			warn: (code) => logger.warn({ code }, 'auth'),
			debug: () => {}
		}
	};
}

async function authorise(event: RequestEvent, credentials: unknown): Promise<{ id: string }> {
	const address = clientAddress(event);
	const answer = await checkCredentials(database(), credentials, address ?? 'unknown');
	if (answer.outcome === 'throttled') throw new Throttled();
	if (answer.outcome === 'wrong') throw new WrongCredentials();
	await recordAudit(database(), { actorId: answer.personId, action: 'signed_in', address });
	return { id: String(answer.personId) };
}

/** A new sign-in gets a new session; the one that the browser had before ends with it. */
async function openAt(event: RequestEvent, personId: number): Promise<{ sid: string }> {
	const before = await readSessionCookie(event);
	if (before) await revokeSession(database(), before);
	const sid = await openSession(database(), personId, {
		address: clientAddress(event),
		userAgent: event.request.headers.get('user-agent')
	});
	return { sid };
}

/** Where to go after signing in or out: a path on this host, else the notebook. */
export function ownPath(url: string, baseUrl: string): string {
	try {
		const target = new URL(url, baseUrl);
		const path = `${target.pathname}${target.search}${target.hash}`;
		// "//host" and "/\host" would leave this host.
		return target.origin === new URL(baseUrl).origin && /^\/(?![/\\])/.test(path) ? path : '/notebook';
	} catch {
		return '/notebook';
	}
}
