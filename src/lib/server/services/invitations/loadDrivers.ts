import type { Knex } from 'knex';
import type { DriversView, RosterRow } from '../../../schemas/invitations.ts';
import { seenOwners, seenRuns } from '../../access/seenRuns.ts';
import { givenRoles } from '../../access/sharing.ts';
import type { Viewer } from '../../access/viewer.ts';
import { database } from '../../db/database.ts';
import { listLayoutHeads } from '../../db/layoutHeads.ts';
import { encodePublicId } from '../../db/publicId.ts';
import { listFoundRuns, seenRunRows, toRunListItem } from '../../db/runRepository.ts';
import { listGiven, listReceived, whatIsSeen } from './grants.ts';
import { listAskable } from './shareOptions.ts';
import { listSent } from './writeInvitation.ts';

const ROLE_TEXT = { driver: 'driver', coach: 'coach', manager: 'manager', admin: 'administrator' } as const;

/** A coach's drivers and invitations; and for everybody, who sees their laps. */
export async function loadDrivers(viewer: Viewer): Promise<DriversView> {
	const db = database();
	const owners = await seenOwners(db, viewer);
	const [roster, invitations, given, askable, person] = await Promise.all([
		listRoster(db, viewer, owners),
		listSent(db, viewer),
		listGiven(db, viewer),
		listAskable(db, viewer, owners),
		db('people').where({ id: viewer.personId }).first<{ is_minor: number }>('is_minor')
	]);
	return {
		roster,
		invitations,
		given,
		askable,
		mayInvite: person.is_minor === 0,
		roles: givenRoles(viewer).map(({ organisation, role }) => ({
			value: `${organisation.organisationPublicId}:${role}`,
			label: `${organisation.organisationName}, as ${ROLE_TEXT[role]}`
		}))
	};
}

/** Everybody who lets the viewer see something, who drove last first; those who have not driven yet by name. */
async function listRoster(db: Knex, viewer: Viewer, owners: readonly number[]): Promise<RosterRow[]> {
	const others = owners.filter((id) => id !== viewer.personId);
	if (others.length === 0) return [];
	const [people, grants, lastRuns] = await Promise.all([
		db('people')
			.whereIn('id', others)
			.whereNull('disabled_at')
			.orderBy('name')
			.select<{ id: number; public_id: Buffer; name: string }[]>('id', 'public_id', 'name'),
		listReceived(db, viewer),
		listLastRuns(db, viewer, others)
	]);
	const layouts = await listLayoutHeads(
		db,
		viewer,
		lastRuns.map(({ row }) => row.layout_id)
	);
	const rows = people.map(({ id, public_id, name }): RosterRow => {
		const theirs = grants.filter(({ owner_id }) => owner_id === id);
		const last = lastRuns.find(({ row }) => row.owner_id === id);
		const layout = last && layouts.get(last.row.layout_id);
		const direct = theirs.some(({ person_name }) => person_name !== null);
		return {
			driver: { id: encodePublicId(public_id), name },
			grants: [...new Set(theirs.map(whatIsSeen))],
			through: direct ? null : (theirs[0]?.organisation_name ?? null),
			runs: last?.total ?? 0,
			lastRun: last && layout ? toRunListItem(last.row, layout, viewer) : null
		};
	});
	const at = ({ lastRun }: RosterRow) => (lastRun ? (lastRun.startedAt ?? lastRun.uploadedAt) : '');
	return rows.sort((a, b) => (at(a) < at(b) ? 1 : at(a) > at(b) ? -1 : a.driver.name.localeCompare(b.driver.name)));
}

/** The last run of each person that the viewer may see, with how many there are. */
async function listLastRuns(db: Knex, viewer: Viewer, owners: readonly number[]) {
	const ranked = db('runs')
		.whereIn('runs.owner_id', owners)
		.whereNotNull('runs.analysis_id')
		.where(seenRuns(db, viewer))
		.select(
			'runs.id',
			db.raw('COUNT(*) OVER (PARTITION BY runs.owner_id) AS total'),
			db.raw('ROW_NUMBER() OVER (PARTITION BY runs.owner_id ORDER BY runs.sort_at DESC, runs.id DESC) AS newest')
		)
		.as('ranked');
	const last = await db.from(ranked).where('newest', 1).select<{ id: number; total: number }[]>('id', 'total');
	if (last.length === 0) return [];
	const totals = new Map(last.map(({ id, total }) => [id, total]));
	const rows = await listFoundRuns(seenRunRows(db, viewer).whereIn('runs.id', [...totals.keys()]));
	return rows.map((row) => ({ row, total: totals.get(row.run_id) ?? 0 }));
}
