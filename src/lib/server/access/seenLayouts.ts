import type { Knex } from 'knex';
import { seenRuns } from './seenRuns.ts';
import { readingOrganisations, type Viewer } from './viewer.ts';

/**
 * `layouts` joined with `circuits` that the viewer may see: public ones, one's own, those of one's organisations, and any on
 * which a run lies that the viewer may see.
 *
 * @param owners from `seenOwners`: by them the index finds the few runs that count among all that lie on the layout
 */
export function seenLayouts(db: Knex, viewer: Viewer, owners: readonly number[]): Knex.Raw {
	const organisations = viewer.memberships.map(({ organisationId }) => organisationId);
	return db.raw(
		`(circuits.is_public OR circuits.created_by <=> ? OR ${isOneOf('circuits.organisation_id', organisations)}
			OR EXISTS (SELECT 1 FROM runs WHERE runs.layout_id = layouts.id AND ${isOneOf('runs.owner_id', owners)} AND ?))`,
		[viewer.personId, ...organisations, ...owners, seenRuns(db, viewer)]
	);
}

/** Never NULL, for pages read it as a value: an absent organisation is simply none of the viewer's. */
function isOneOf(column: string, keys: readonly number[]): string {
	if (keys.length === 0) return 'FALSE';
	return `(${column} IS NOT NULL AND ${column} IN (${keys.map(() => '?').join(', ')}))`;
}

/**
 * May the viewer name the circuit and its corners: whoever brought it, their guardian, and coaches and managers of the
 * organisation that it belongs to. Condition on `circuits`.
 */
export function editedCircuits(db: Knex, viewer: Viewer): Knex.Raw {
	const organisations = readingOrganisations(viewer);
	return db.raw(
		`(circuits.created_by <=> ? OR ${isOneOf('circuits.organisation_id', organisations)}
			OR EXISTS (SELECT 1 FROM guardian_links
				WHERE guardian_links.minor_id = circuits.created_by AND guardian_links.guardian_id = ? AND guardian_links.ended_at IS NULL))`,
		[viewer.personId, ...organisations, viewer.personId]
	);
}
