import type { Knex } from 'knex';
import type { Role } from '../../schemas/views.ts';
import { holdingGrant } from './seenRuns.ts';
import type { Membership, Viewer } from './viewer.ts';

/** Who may give, take back and ask for a look at laps. Each function gives a condition for a query; the alias is named. */

/** `grants` that admit the viewer now, directly or through an organisation. */
export function grantsToViewer(db: Knex | Knex.Transaction, viewer: Viewer): Knex.Raw {
	const { sql, bindings } = holdingGrant(viewer);
	return db.raw(`(${sql})`, bindings);
}

/** `grants` that the viewer may take back: on their own laps, and on those of minors in their care. */
export function keptGrants(db: Knex | Knex.Transaction, viewer: Viewer): Knex.Raw {
	return db.raw(
		`(grants.owner_id = ?
			OR EXISTS (SELECT 1 FROM guardian_links
				WHERE guardian_links.minor_id = grants.owner_id AND guardian_links.guardian_id = ? AND guardian_links.ended_at IS NULL))`,
		[viewer.personId, viewer.personId]
	);
}

/** `invitations` that the viewer sees, sends again and withdraws: their own, and those in the name of what they manage. */
export function keptInvitations(db: Knex | Knex.Transaction, viewer: Viewer): Knex.Raw {
	const managed = [...new Set(managing(viewer).map(({ organisationId }) => organisationId))];
	const marks = managed.map(() => '?').join(', ');
	return db.raw(
		managed.length === 0
			? 'invitations.inviter_id = ?'
			: `(invitations.inviter_id = ? OR invitations.organisation_id IN (${marks}))`,
		[viewer.personId, ...managed]
	);
}

const managing = ({ memberships }: Viewer): Membership[] =>
	memberships.filter(({ role }) => role === 'manager' || role === 'admin');

/** Roles that the viewer may give: a manager drivers and coaches, an administrator any. */
export function givenRoles(viewer: Viewer): { organisation: Membership; role: Role }[] {
	const given = new Map<string, { organisation: Membership; role: Role }>();
	for (const organisation of managing(viewer)) {
		const roles: Role[] = organisation.role === 'admin' ? ['driver', 'coach', 'manager', 'admin'] : ['driver', 'coach'];
		for (const role of roles) given.set(`${organisation.organisationId} ${role}`, { organisation, role });
	}
	return [...given.values()];
}
