import type { Knex } from 'knex';
import { z } from 'zod';
import { findingCodeSchema, type FindingCode } from '../../schemas/codes.ts';
import type { Phrase } from '../../schemas/debrief.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { decodePublicId, encodePublicId, newPublicId } from '../db/publicId.ts';
import { notFound } from '../http/notFound.ts';
import { RequestProblem } from '../http/problem.ts';

const MOST_PHRASES = 200;

const rowSchema = z.object({
	public_id: z.instanceof(Buffer),
	finding_code: findingCodeSchema.nullable(),
	body: z.string()
});

/** The viewer's own phrases, newest first within each finding: the newest is the one that drafts take. */
export async function listPhrases(viewer: Viewer): Promise<Phrase[]> {
	const found: unknown = await database()('coach_phrases')
		.where({ person_id: viewer.personId })
		.orderBy([{ column: 'finding_code' }, { column: 'id', order: 'desc' }])
		.limit(MOST_PHRASES)
		.select('public_id', 'finding_code', 'body');
	return z
		.array(rowSchema)
		.parse(found)
		.map(({ public_id, finding_code, body }) => ({ id: encodePublicId(public_id), code: finding_code, body }));
}

/** @throws {RequestProblem} `conflict` when the person keeps too many */
export async function keepPhrase(viewer: Viewer, phrase: Omit<Phrase, 'id'>): Promise<void> {
	const db = database();
	const [{ kept }] = await db('coach_phrases')
		.where({ person_id: viewer.personId })
		.count<{ kept: number }[]>({ kept: '*' });
	if (kept >= MOST_PHRASES) {
		throw new RequestProblem(409, 'conflict', `a person keeps at most ${MOST_PHRASES} phrases`, {
			remedy: 'Drop one that is no longer used'
		});
	}
	await db('coach_phrases').insert({
		public_id: newPublicId(),
		person_id: viewer.personId,
		finding_code: phrase.code,
		body: phrase.body
	});
}

/** @throws 404 for a phrase of anybody else */
export async function dropPhrase(viewer: Viewer, phraseId: string): Promise<void> {
	const dropped = await database()('coach_phrases')
		.where({ person_id: viewer.personId, public_id: decodePublicId(phraseId) ?? notFound() })
		.delete();
	if (dropped === 0) notFound();
}

/** What a phrase may leave open: "{driver}", "{corner}", "{gap}". */
export function fillPhrase(body: string, values: Readonly<Record<string, string>>): string {
	return body.replaceAll(/\{(driver|corner|gap)\}/g, (whole, name: string) => values[name] ?? whole);
}

/** The phrase that a draft takes for each finding; `null` is how a debrief opens. */
export async function phrasesByCode(db: Knex, personId: number): Promise<Map<FindingCode | null, string>> {
	const found: unknown = await db('coach_phrases')
		.where({ person_id: personId })
		.orderBy('id')
		.select('public_id', 'finding_code', 'body');
	return new Map(
		z
			.array(rowSchema)
			.parse(found)
			.map(({ finding_code, body }) => [finding_code, body])
	);
}
