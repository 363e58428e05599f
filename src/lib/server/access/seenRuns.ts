import type { Knex } from 'knex';
import { readingOrganisations, type Viewer } from './viewer.ts';

/**
 * The one place that says whose laps a viewer may see. Each function gives a condition for a query; the alias that it speaks
 * of is named. Own laps, laps of a minor whom the viewer is guardian of, and laps that a grant opens: to the viewer, or to
 * an organisation in which the viewer is coach or manager. Roles alone open nothing, and neither does running the site.
 */

/** A grant that holds now and admits the viewer; alias `grants`. Takes the viewer's id and organisations as bindings. */
export function holdingGrant(viewer: Viewer): { sql: string; bindings: Knex.RawBinding[] } {
	const organisations = readingOrganisations(viewer);
	const grantee =
		organisations.length === 0
			? 'grants.grantee_person_id = ?'
			: `(grants.grantee_person_id = ? OR grants.grantee_organisation_id IN (${organisations.map(() => '?').join(', ')}))`;
	return {
		sql: `${grantee} AND grants.from_at <= CURRENT_TIMESTAMP(3)
			AND (grants.revoked_at IS NULL OR grants.revoked_at > CURRENT_TIMESTAMP(3))`,
		bindings: [viewer.personId, ...organisations]
	};
}

/** `runs` that the viewer may see; a deleted run is nobody's. */
export function seenRuns(db: Knex, viewer: Viewer): Knex.Raw {
	const grant = holdingGrant(viewer);
	return db.raw(
		`(runs.deleted_at IS NULL AND (
			runs.owner_id = ?
			OR EXISTS (SELECT 1 FROM guardian_links
				WHERE guardian_links.minor_id = runs.owner_id AND guardian_links.guardian_id = ? AND guardian_links.ended_at IS NULL)
			OR EXISTS (SELECT 1 FROM grants WHERE grants.owner_id = runs.owner_id AND ${grant.sql} AND (
				grants.scope = 'all'
				OR (grants.scope = 'run' AND grants.run_id = runs.id)
				OR (grants.scope = 'event' AND grants.event_id = runs.event_id)
				OR (grants.scope = 'circuit' AND grants.circuit_id =
					(SELECT circuit_id FROM layouts WHERE layouts.id = runs.layout_id))))))`,
		[viewer.personId, viewer.personId, ...grant.bindings]
	);
}

/**
 * People of whose runs the viewer may see at least some. Lists look only at these, by index; `seenRuns` still decides
 * on each run.
 */
export async function seenOwners(db: Knex, viewer: Viewer): Promise<number[]> {
	const grant = holdingGrant(viewer);
	const rows: { owner_id: number }[] = await db
		.select<{ owner_id: number }[]>('owner_id')
		.from('grants')
		.whereRaw(grant.sql, grant.bindings)
		.union([
			db
				.select('minor_id as owner_id')
				.from('guardian_links')
				.where({ guardian_id: viewer.personId })
				.whereNull('ended_at')
		]);
	return [...new Set([viewer.personId, ...rows.map(({ owner_id }) => owner_id)])];
}

/** People whose runs, uploads and grants the viewer may change: oneself, and minors in one's care. */
export async function keptPeople(db: Knex, viewer: Viewer): Promise<number[]> {
	const minors = await db('guardian_links')
		.where({ guardian_id: viewer.personId })
		.whereNull('ended_at')
		.select<{ minor_id: number }[]>('minor_id');
	return [viewer.personId, ...minors.map(({ minor_id }) => minor_id)];
}

/** `uploads` that the viewer may see: raw files stay with their owner (or guardian); no grant opens them. */
export function seenUploads(db: Knex, viewer: Viewer): Knex.Raw {
	return db.raw('(uploads.deleted_at IS NULL AND ?)', [keptUploads(db, viewer)]);
}

/** `uploads` that are the viewer's to keep, also those that they took out of sight and may bring back. */
export function keptUploads(db: Knex, viewer: Viewer): Knex.Raw {
	return db.raw(
		`(uploads.owner_id = ?
			OR EXISTS (SELECT 1 FROM guardian_links
				WHERE guardian_links.minor_id = uploads.owner_id AND guardian_links.guardian_id = ? AND guardian_links.ended_at IS NULL))`,
		[viewer.personId, viewer.personId]
	);
}
