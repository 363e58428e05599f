import type { TokenInput } from '../../schemas/settings.ts';
import type { Viewer } from '../access/viewer.ts';
import { hashToken, newSecret } from '../auth/sessions.ts';
import { recordAudit } from '../db/auditRepository.ts';
import { database } from '../db/database.ts';
import { decodePublicId, encodePublicId, newPublicId } from '../db/publicId.ts';
import { retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { notFound } from '../http/notFound.ts';
import { RequestProblem } from '../http/problem.ts';

/** Says in a log or a leak what it is. */
const PREFIX = 'kn_';
/** More than this nobody keeps an eye on. */
const MOST_TOKENS = 20;

/**
 * Makes a token for a program. Only its hash is stored: whoever loses it makes another one.
 *
 * @returns the token, to be shown this once
 * @throws {RequestProblem} `conflict` when the person holds too many
 */
export async function makeToken(viewer: Viewer, { name, scopes, days }: TokenInput): Promise<string> {
	const token = PREFIX + newSecret();
	const publicId = newPublicId();
	await retryOnDeadlock(database(), async (trx) => {
		// Two requests at once must not both see room for one more.
		await trx('people').where({ id: viewer.personId }).forUpdate().first('id');
		const [{ held }] = await trx('api_tokens')
			.where({ person_id: viewer.personId })
			.whereNull('revoked_at')
			.count<{ held: number }[]>({ held: '*' });
		if (held >= MOST_TOKENS) {
			throw new RequestProblem(409, 'conflict', `a person holds at most ${MOST_TOKENS} tokens`, {
				remedy: 'Revoke one that is no longer used'
			});
		}
		await trx('api_tokens').insert({
			public_id: publicId,
			person_id: viewer.personId,
			name,
			token_hash: hashToken(token),
			scopes: JSON.stringify([...new Set(scopes)]),
			expires_at: trx.raw('CURRENT_TIMESTAMP(3) + INTERVAL ? DAY', [days])
		});
		await recordAudit(trx, {
			actorId: viewer.personId,
			action: 'token_made',
			subject: { kind: 'token', id: encodePublicId(publicId) },
			detail: { scopes: scopes.join(' '), days }
		});
	});
	return token;
}

/**
 * Ends a token: from now on it is refused.
 *
 * @throws 404 for a token of anybody else, as for one that never was
 */
export async function revokeToken(viewer: Viewer, tokenId: string): Promise<void> {
	const db = database();
	const revoked = await db('api_tokens')
		.where({ person_id: viewer.personId, public_id: decodePublicId(tokenId) ?? notFound() })
		.whereNull('revoked_at')
		.update({ revoked_at: db.raw('CURRENT_TIMESTAMP(3)') });
	if (revoked === 0) notFound();
	await recordAudit(db, { actorId: viewer.personId, action: 'token_revoked', subject: { kind: 'token', id: tokenId } });
}
