import type { Knex } from 'knex';
import { z } from 'zod';
import { grantScopeSchema, type GrantView } from '../../../schemas/invitations.ts';
import { grantsToViewer, keptGrants } from '../../access/sharing.ts';
import type { Viewer } from '../../access/viewer.ts';
import { recordAudit } from '../../db/auditRepository.ts';
import { database } from '../../db/database.ts';
import { decodePublicId, encodePublicId, newPublicId } from '../../db/publicId.ts';
import { retryOnDeadlock } from '../../db/retryOnDeadlock.ts';
import { notFound } from '../../http/notFound.ts';
import type { GrantPlace } from './shareOptions.ts';

export interface Grantee {
	personId: number | null;
	organisationId: number | null;
}

/** Lets somebody see laps of `ownerId`; one that holds already is not given twice. */
export async function giveGrant(
	trx: Knex.Transaction,
	actorId: number,
	ownerId: number,
	to: Grantee,
	place: GrantPlace
): Promise<void> {
	const columns = {
		owner_id: ownerId,
		grantee_person_id: to.personId,
		grantee_organisation_id: to.organisationId,
		scope: place.scope,
		circuit_id: place.circuitId,
		event_id: place.eventId,
		run_id: place.runId
	};
	const holds: unknown = await trx('grants').where(columns).whereNull('revoked_at').first('id');
	if (holds) return;
	const publicId = newPublicId();
	await trx('grants').insert({ ...columns, public_id: publicId, created_by: actorId });
	await recordAudit(trx, {
		actorId,
		action: 'grant_given',
		subject: { kind: 'grant', id: encodePublicId(publicId) },
		detail: { owner: ownerId, person: to.personId, organisation: to.organisationId, scope: place.scope }
	});
}

/**
 * Takes back what the viewer let somebody see: from the next request on, they see nothing of it.
 *
 * @throws 404 for a grant on anybody else's laps, as for one that never was
 */
export async function revokeGrant(viewer: Viewer, grantId: string): Promise<void> {
	const publicId = decodePublicId(grantId) ?? notFound();
	await retryOnDeadlock(database(), async (trx) => {
		const revoked = await trx('grants')
			.where({ public_id: publicId })
			.whereNull('revoked_at')
			.where(keptGrants(trx, viewer))
			.update({ revoked_at: trx.raw('CURRENT_TIMESTAMP(3)'), revoked_by: viewer.personId });
		if (revoked === 0) notFound();
		await recordAudit(trx, {
			actorId: viewer.personId,
			action: 'grant_revoked',
			subject: { kind: 'grant', id: grantId }
		});
	});
}

const rowSchema = z.object({
	public_id: z.instanceof(Buffer),
	owner_id: z.number(),
	owner_public_id: z.instanceof(Buffer),
	owner_name: z.string(),
	person_name: z.string().nullable(),
	organisation_name: z.string().nullable(),
	scope: grantScopeSchema,
	place: z.string().nullable(),
	from_at: z.date()
});
export type GrantRow = z.infer<typeof rowSchema>;

/** Grants with the names in them; the caller says which. */
function grantRows(db: Knex): Knex.QueryBuilder {
	return db('grants')
		.join('people as owners', 'owners.id', 'grants.owner_id')
		.leftJoin('people as grantees', 'grantees.id', 'grants.grantee_person_id')
		.leftJoin('organisations', 'organisations.id', 'grants.grantee_organisation_id')
		.leftJoin('events', 'events.id', 'grants.event_id')
		.leftJoin('runs', 'runs.id', 'grants.run_id')
		.leftJoin('layouts', 'layouts.id', 'runs.layout_id')
		.leftJoin('circuits', (on) => on.on('circuits.id', '=', db.raw('COALESCE(grants.circuit_id, layouts.circuit_id)')))
		.select(
			'grants.public_id',
			'grants.owner_id',
			'grants.scope',
			'grants.from_at',
			{
				owner_public_id: 'owners.public_id',
				owner_name: 'owners.name',
				person_name: 'grantees.name',
				organisation_name: 'organisations.name'
			},
			db.raw('COALESCE(events.name, circuits.name) AS place')
		)
		.orderBy(['owners.name', 'grants.id']);
}

/** "all runs", "runs at Vallmere Park", "one run at Vallmere Park". */
export function whatIsSeen({ scope, place }: Pick<GrantRow, 'scope' | 'place'>): string {
	if (scope === 'all') return 'all runs';
	if (scope === 'event') return `runs of ${place ?? 'one event'}`;
	return `${scope === 'run' ? 'one run' : 'runs'} at ${place ?? 'one circuit'}`;
}

/** Who sees laps of the viewer and of minors in their care. */
export async function listGiven(db: Knex, viewer: Viewer): Promise<GrantView[]> {
	const found: unknown = await grantRows(db).where(keptGrants(db, viewer)).whereNull('grants.revoked_at');
	return z
		.array(rowSchema)
		.parse(found)
		.map((row) => ({
			id: encodePublicId(row.public_id),
			owner: { id: encodePublicId(row.owner_public_id), name: row.owner_name },
			grantee: row.person_name ?? row.organisation_name ?? '',
			isOrganisation: row.person_name === null,
			what: whatIsSeen(row),
			since: row.from_at.toISOString()
		}));
}

/** What admits the viewer now. */
export async function listReceived(db: Knex, viewer: Viewer): Promise<GrantRow[]> {
	const found: unknown = await grantRows(db).where(grantsToViewer(db, viewer));
	return z.array(rowSchema).parse(found);
}
