import type { Knex } from 'knex';
import { seenRuns } from './seenRuns.ts';
import { readingOrganisations, type Viewer } from './viewer.ts';

/**
 * `layouts` joined with `circuits` that the viewer may see: public ones, one's own, those of one's organisations, and any on
 * which a run lies that the viewer may see.
 */
export function seenLayouts(db: Knex, viewer: Viewer): Knex.Raw {
	const organisations = viewer.memberships.map(({ organisationId }) => organisationId);
	const ofOrganisation =
		organisations.length === 0
			? 'FALSE'
			: `COALESCE(circuits.organisation_id IN (${organisations.map(() => '?').join(', ')}), FALSE)`;
	return db.raw(
		`(circuits.is_public OR circuits.created_by <=> ? OR ${ofOrganisation}
			OR EXISTS (SELECT 1 FROM runs WHERE runs.layout_id = layouts.id AND ?))`,
		[viewer.personId, ...organisations, seenRuns(db, viewer)]
	);
}

/**
 * May the viewer name the circuit and its corners: whoever brought it, their guardian, and coaches and managers of the
 * organisation that it belongs to. Condition on `circuits`.
 */
export function editedCircuits(db: Knex, viewer: Viewer): Knex.Raw {
	const organisations = readingOrganisations(viewer);
	const ofOrganisation =
		organisations.length === 0
			? 'FALSE'
			: `COALESCE(circuits.organisation_id IN (${organisations.map(() => '?').join(', ')}), FALSE)`;
	// Never NULL, for pages read it as a value: an absent creator or organisation is simply not the viewer's.
	return db.raw(
		`(circuits.created_by <=> ? OR ${ofOrganisation}
			OR EXISTS (SELECT 1 FROM guardian_links
				WHERE guardian_links.minor_id = circuits.created_by AND guardian_links.guardian_id = ? AND guardian_links.ended_at IS NULL))`,
		[viewer.personId, ...organisations, viewer.personId]
	);
}
