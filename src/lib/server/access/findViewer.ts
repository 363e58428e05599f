import type { Knex } from 'knex';
import { z } from 'zod';
import { tokenScopeSchema } from '../../schemas/api.ts';
import { preferencesSchema, roleSchema, type Preferences } from '../../schemas/views.ts';
import { hashToken, IDLE_DAYS, SEEN_STEP_S, SESSION_HOLDS } from '../auth/sessions.ts';
import { encodePublicId } from '../db/publicId.ts';
import type { Viewer } from './viewer.ts';

/** What a person has who never chose anything. */
export const DEFAULT_PREFERENCES: Preferences = {
	speedUnit: 'kmh',
	lengthUnit: 'm',
	pressureUnit: 'bar',
	theme: 'system'
};

const PERSON = `people.id AS person_id, people.public_id, people.name, people.email, people.preferences,
	site_operators.person_id IS NOT NULL AS is_operator,
	memberships.role, organisations.id AS organisation_id, organisations.public_id AS organisation_public_id,
	organisations.name AS organisation_name,
	(EXISTS (SELECT 1 FROM grants WHERE grants.grantee_person_id = people.id AND grants.revoked_at IS NULL)
		OR EXISTS (SELECT 1 FROM guardian_links WHERE guardian_links.guardian_id = people.id AND guardian_links.ended_at IS NULL)
	) AS is_admitted`;

const JOINS = `LEFT JOIN site_operators ON site_operators.person_id = people.id
	LEFT JOIN memberships ON memberships.person_id = people.id AND memberships.ended_at IS NULL
	LEFT JOIN organisations ON organisations.id = memberships.organisation_id AND organisations.archived_at IS NULL`;

const rowSchema = z.object({
	person_id: z.number(),
	public_id: z.instanceof(Buffer),
	name: z.string(),
	email: z.string().nullable(),
	preferences: preferencesSchema.partial().catch({}),
	is_operator: z.number(),
	role: roleSchema.nullable(),
	organisation_id: z.number().nullable(),
	organisation_public_id: z.instanceof(Buffer).nullable(),
	organisation_name: z.string().nullable(),
	is_admitted: z.number(),
	session_id: z.number().nullable(),
	scopes: z.array(tokenScopeSchema).nullable(),
	seen_long_ago: z.number()
});

/**
 * The viewer whose cookie carries `secret`, in one query; null when the session was revoked, ran out, or the account is closed.
 */
export async function findViewerBySession(db: Knex, secret: string): Promise<Viewer | null> {
	const [rows] = await db.raw(
		`SELECT ${PERSON}, sign_in_sessions.id AS session_id, NULL AS scopes,
			sign_in_sessions.last_seen_at < CURRENT_TIMESTAMP(3) - INTERVAL ? SECOND AS seen_long_ago
		FROM sign_in_sessions JOIN people ON people.id = sign_in_sessions.person_id ${JOINS}
		WHERE sign_in_sessions.token_hash = ? AND ${SESSION_HOLDS} AND people.disabled_at IS NULL`,
		[SEEN_STEP_S, hashToken(secret), IDLE_DAYS]
	);
	const found = readRows(rows);
	if (found?.seenLongAgo) {
		await db('sign_in_sessions')
			.where({ id: found.viewer.sessionId })
			.update({ last_seen_at: db.raw('CURRENT_TIMESTAMP(3)') });
	}
	return found?.viewer ?? null;
}

/** The viewer whose API token this is, with the scopes that it was made for; null when it does not hold. */
export async function findViewerByToken(db: Knex, token: string): Promise<Viewer | null> {
	const hash = hashToken(token);
	const [rows] = await db.raw(
		`SELECT ${PERSON}, NULL AS session_id, api_tokens.scopes,
			COALESCE(api_tokens.last_used_at < CURRENT_TIMESTAMP(3) - INTERVAL ? SECOND, TRUE) AS seen_long_ago
		FROM api_tokens JOIN people ON people.id = api_tokens.person_id ${JOINS}
		WHERE api_tokens.token_hash = ? AND api_tokens.revoked_at IS NULL
			AND (api_tokens.expires_at IS NULL OR api_tokens.expires_at > CURRENT_TIMESTAMP(3)) AND people.disabled_at IS NULL`,
		[SEEN_STEP_S, hash]
	);
	const found = readRows(rows);
	if (found?.seenLongAgo) {
		await db('api_tokens')
			.where({ token_hash: hash })
			.update({ last_used_at: db.raw('CURRENT_TIMESTAMP(3)') });
	}
	return found?.viewer ?? null;
}

/** The viewer that a person is, for work that is done in their name; null for a closed account. */
export async function findViewerOfPerson(db: Knex, personId: number): Promise<Viewer | null> {
	const [rows] = await db.raw(
		`SELECT ${PERSON}, NULL AS session_id, NULL AS scopes, FALSE AS seen_long_ago
		FROM people ${JOINS} WHERE people.id = ? AND people.disabled_at IS NULL`,
		[personId]
	);
	return readRows(rows)?.viewer ?? null;
}

function readRows(input: unknown): { viewer: Viewer; seenLongAgo: boolean } | null {
	const rows = z.array(rowSchema).parse(input);
	const [first] = rows;
	if (!first) return null;
	const memberships = rows.flatMap((row) =>
		row.organisation_id !== null &&
		row.organisation_public_id !== null &&
		row.organisation_name !== null &&
		row.role !== null
			? [
					{
						organisationId: row.organisation_id,
						organisationPublicId: encodePublicId(row.organisation_public_id),
						organisationName: row.organisation_name,
						role: row.role
					}
				]
			: []
	);
	return {
		viewer: {
			personId: first.person_id,
			publicId: encodePublicId(first.public_id),
			name: first.name,
			email: first.email ?? '',
			isOperator: first.is_operator === 1,
			memberships,
			readsOthers: first.is_admitted === 1 || memberships.some(({ role }) => role === 'coach' || role === 'manager'),
			preferences: { ...DEFAULT_PREFERENCES, ...first.preferences },
			sessionId: first.session_id,
			scopes: first.scopes && new Set(first.scopes)
		},
		seenLongAgo: first.seen_long_ago === 1
	};
}
