import { z } from 'zod';
import { tokenScopeSchema } from '../../schemas/api.ts';
import type { SettingsView, SignInView, TokenView } from '../../schemas/settings.ts';
import type { Viewer } from '../access/viewer.ts';
import { IDLE_DAYS, SESSION_HOLDS } from '../auth/sessions.ts';
import { database } from '../db/database.ts';
import { encodePublicId } from '../db/publicId.ts';

const MOST_SIGN_INS = 50;

const signInRowSchema = z.object({
	id: z.number(),
	public_id: z.instanceof(Buffer),
	user_agent: z.string().nullable(),
	address: z.string().nullable(),
	created_at: z.date(),
	last_seen_at: z.date()
});

const tokenRowSchema = z.object({
	public_id: z.instanceof(Buffer),
	name: z.string(),
	scopes: z.array(tokenScopeSchema),
	created_at: z.date(),
	last_used_at: z.date().nullable(),
	expires_at: z.date().nullable()
});

/** What the person themselves may look at and change: nobody else's settings can be asked for. */
export async function loadSettings(viewer: Viewer): Promise<SettingsView> {
	const [signIns, tokens] = await Promise.all([listSignIns(viewer), listTokens(viewer)]);
	return { name: viewer.name, email: viewer.email, preferences: viewer.preferences, signIns, tokens };
}

/** Sign-ins that hold, the last used first. */
async function listSignIns(viewer: Viewer): Promise<SignInView[]> {
	const rows: unknown = await database()('sign_in_sessions')
		.where({ person_id: viewer.personId })
		.whereRaw(SESSION_HOLDS, [IDLE_DAYS])
		.orderBy('last_seen_at', 'desc')
		.limit(MOST_SIGN_INS)
		.select(Object.keys(signInRowSchema.shape));
	return z
		.array(signInRowSchema)
		.parse(rows)
		.map((row) => ({
			id: encodePublicId(row.public_id),
			userAgent: row.user_agent,
			address: row.address,
			createdAt: row.created_at.toISOString(),
			lastSeenAt: row.last_seen_at.toISOString(),
			isThis: row.id === viewer.sessionId
		}));
}

/** Tokens that hold, newest first. */
async function listTokens(viewer: Viewer): Promise<TokenView[]> {
	const db = database();
	const rows: unknown = await db('api_tokens')
		.where({ person_id: viewer.personId })
		.whereNull('revoked_at')
		.where((either) => either.whereNull('expires_at').orWhere('expires_at', '>', db.raw('CURRENT_TIMESTAMP(3)')))
		.orderBy('id', 'desc')
		.select(Object.keys(tokenRowSchema.shape));
	return z
		.array(tokenRowSchema)
		.parse(rows)
		.map((row) => ({
			id: encodePublicId(row.public_id),
			name: row.name,
			scopes: row.scopes,
			createdAt: row.created_at.toISOString(),
			lastUsedAt: row.last_used_at?.toISOString() ?? null,
			expiresAt: row.expires_at?.toISOString() ?? null
		}));
}
