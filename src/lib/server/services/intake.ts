import type { Knex } from 'knex';
import { z } from 'zod';
import { intakeAnswersSchema, type IntakeAnswers, type IntakeView } from '../../schemas/intake.ts';
import type { PersonHead } from '../../schemas/views.ts';
import { keptPeople, seenOwners } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { recordAudit } from '../db/auditRepository.ts';
import { database } from '../db/database.ts';
import { decodePublicId, encodePublicId } from '../db/publicId.ts';
import { isDuplicate, retryOnDeadlock } from '../db/retryOnDeadlock.ts';
import { conflict } from '../http/conflict.ts';
import { notFound } from '../http/notFound.ts';

const rowSchema = z.object({
	version: z.number(),
	answers: intakeAnswersSchema,
	created_at: z.date(),
	saved_by: z.string().nullable()
});

/**
 * A driver's intake, newest version first: for themself, their guardian, and whom they let see any laps.
 *
 * @throws 404 for everybody else
 */
export async function listIntakes(viewer: Viewer, personId: string): Promise<IntakeView[]> {
	const db = database();
	const { id } = await findAmong(db, personId, await seenOwners(db, viewer));
	const found: unknown = await db('intakes')
		.leftJoin('people', 'people.id', 'intakes.created_by')
		.where({ owner_id: id })
		.orderBy('version', 'desc')
		.limit(20)
		.select('intakes.version', 'intakes.answers', 'intakes.created_at', { saved_by: 'people.name' });
	return z
		.array(rowSchema)
		.parse(found)
		.map(({ version, answers, created_at, saved_by }) => ({
			version,
			answers,
			savedAt: created_at.toISOString(),
			savedBy: saved_by
		}));
}

/** Whose intake the viewer may write: their own, and that of a minor in their care. */
export async function getKeptPerson(viewer: Viewer, personId: string): Promise<PersonHead> {
	const db = database();
	const { name } = await findAmong(db, personId, await keptPeople(db, viewer));
	return { id: personId, name };
}

/**
 * Saves the answers as the next version.
 *
 * @param since version that the writer had before them; 0 for none
 * @throws 404 for an intake of anybody else; 409 when another window saved meanwhile
 */
export async function saveIntake(
	viewer: Viewer,
	personId: string,
	answers: IntakeAnswers,
	since: number
): Promise<void> {
	const db = database();
	const { id } = await findAmong(db, personId, await keptPeople(db, viewer));
	try {
		await retryOnDeadlock(db, async (trx) => {
			const newest = await trx('intakes')
				.where({ owner_id: id })
				.max<{ version: number | null }[]>({ version: 'version' })
				.then(([row]) => row.version ?? 0);
			if (newest !== since) savedMeanwhile();
			await trx('intakes').insert({
				owner_id: id,
				version: since + 1,
				answers: JSON.stringify(answers),
				created_by: viewer.personId
			});
			await recordAudit(trx, {
				actorId: viewer.personId,
				action: 'intake_saved',
				subject: { kind: 'person', id: personId }
			});
		});
	} catch (error) {
		if (isDuplicate(error)) savedMeanwhile();
		throw error;
	}
}

const savedMeanwhile = (): never =>
	conflict('conflict', 'It was saved in another window meanwhile; look at what stands there now, then save again');

async function findAmong(
	db: Knex,
	personId: string,
	ids: readonly number[]
): Promise<{ id: number; publicId: string; name: string }> {
	const row = await db('people')
		.where({ public_id: decodePublicId(personId) ?? notFound() })
		.whereIn('id', [...ids])
		.first<{ id: number; public_id: Buffer; name: string } | undefined>('id', 'public_id', 'name');
	return row ? { id: row.id, publicId: encodePublicId(row.public_id), name: row.name } : notFound();
}
