import type { Knex } from 'knex';
import { seenRuns } from './seenRuns.ts';
import { readingOrganisations, type Viewer } from './viewer.ts';

/**
 * Who may see what a coach and a driver say to each other. Each function gives a condition for a query; the aliases that it speaks of
 * are named. What a driver took back closes at once, also for the coach who wrote it: the words stay with the driver.
 */

interface Condition {
	sql: string;
	bindings: Knex.RawBinding[];
}

const marks = (values: readonly unknown[]): string => values.map(() => '?').join(', ');

/** The person is the viewer, or a minor in the viewer's care. */
function isKept(viewer: Viewer, person: string): Condition {
	return {
		sql: `(${person} = ? OR EXISTS (SELECT 1 FROM guardian_links
			WHERE guardian_links.minor_id = ${person} AND guardian_links.guardian_id = ? AND guardian_links.ended_at IS NULL))`,
		bindings: [viewer.personId, viewer.personId]
	};
}

/** A grant that holds now, from `owner` to the viewer or to an organisation in which the viewer is coach or manager. */
function isAdmittedBy(viewer: Viewer, owner: string, scope: string): Condition {
	const organisations = readingOrganisations(viewer);
	const grantee =
		organisations.length === 0
			? 'grants.grantee_person_id = ?'
			: `(grants.grantee_person_id = ? OR grants.grantee_organisation_id IN (${marks(organisations)}))`;
	return {
		sql: `EXISTS (SELECT 1 FROM grants WHERE grants.owner_id = ${owner} AND ${grantee}
			AND grants.from_at <= CURRENT_TIMESTAMP(3) AND (grants.revoked_at IS NULL OR grants.revoked_at > CURRENT_TIMESTAMP(3))
			AND ${scope})`,
		bindings: [viewer.personId, ...organisations]
	};
}

/** A grant that opens everything on a layout. */
const wholeLayout = (layout: string) => `(grants.scope = 'all' OR (grants.scope = 'circuit' AND grants.circuit_id =
	(SELECT circuit_id FROM layouts WHERE layouts.id = ${layout})))`;

/** A grant that opens anything on a layout. */
const someOfLayout = (layout: string) => `(${wholeLayout(layout)}
	OR (grants.scope = 'run' AND EXISTS (SELECT 1 FROM runs AS granted WHERE granted.id = grants.run_id AND granted.layout_id = ${layout}))
	OR (grants.scope = 'event' AND EXISTS (SELECT 1 FROM runs AS granted
		WHERE granted.event_id = grants.event_id AND granted.owner_id = grants.owner_id AND granted.layout_id = ${layout})))`;

/** The viewer lets the person read at least some of their laps on the layout: the person coaches them there. */
function isCoachedBy(viewer: Viewer, coach: string, layout: string): Condition {
	return {
		sql: `EXISTS (SELECT 1 FROM grants WHERE grants.owner_id = ? AND grants.revoked_at IS NULL AND grants.from_at <= CURRENT_TIMESTAMP(3)
			AND (grants.grantee_person_id = ${coach} OR grants.grantee_organisation_id IN (
				SELECT memberships.organisation_id FROM memberships
				WHERE memberships.person_id = ${coach} AND memberships.role IN ('coach', 'manager') AND memberships.ended_at IS NULL))
			AND ${someOfLayout(layout)})`,
		bindings: [viewer.personId]
	};
}

function any(...conditions: Condition[]): Condition {
	return {
		sql: `(${conditions.map(({ sql }) => sql).join('\n\t\tOR ')})`,
		bindings: conditions.flatMap(({ bindings }) => bindings)
	};
}

function both(first: Condition, second: Condition): Condition {
	return { sql: `(${first.sql} AND ${second.sql})`, bindings: [...first.bindings, ...second.bindings] };
}

const plain = (sql: string, ...bindings: Knex.RawBinding[]): Condition => ({ sql, bindings });
const raw = (db: Knex, { sql, bindings }: Condition): Knex.Raw => db.raw(sql, bindings);

/**
 * `zone_notes` that the viewer may see: the driver's whom it is for (and their guardian's); the author's, while the driver admits them
 * on the layout; those of others to whom the driver opened the whole layout, or the run that the note was written on. A note for all is
 * the author's and that of every driver whom they coach there.
 */
export function seenNotes(db: Knex, viewer: Viewer): Knex.Raw {
	return raw(db, both(plain('zone_notes.deleted_at IS NULL'), notesInReach(viewer)));
}

/** `zone_notes` that the viewer wrote and may still change, deleted or not. */
export function keptNotes(db: Knex, viewer: Viewer): Knex.Raw {
	return raw(db, both(plain('zone_notes.author_id = ?', viewer.personId), notesInReach(viewer)));
}

function notesInReach(viewer: Viewer): Condition {
	const ofDriver = any(
		isKept(viewer, 'zone_notes.driver_id'),
		both(
			plain('zone_notes.author_id = ?', viewer.personId),
			isAdmittedBy(viewer, 'zone_notes.driver_id', someOfLayout('zone_notes.layout_id'))
		),
		isAdmittedBy(
			viewer,
			'zone_notes.driver_id',
			`(${wholeLayout('zone_notes.layout_id')} OR (grants.scope = 'run' AND grants.run_id = zone_notes.run_id))`
		)
	);
	const ofAll = any(
		plain('zone_notes.author_id = ?', viewer.personId),
		isCoachedBy(viewer, 'zone_notes.author_id', 'zone_notes.layout_id')
	);
	return any(
		both(plain('zone_notes.driver_id IS NOT NULL'), ofDriver),
		both(plain('zone_notes.driver_id IS NULL'), ofAll)
	);
}

/** `focus_points` that the viewer may see: the driver's, the setter's while admitted, and of whom the driver opened the layout to. */
export function seenFocus(db: Knex, viewer: Viewer): Knex.Raw {
	return raw(
		db,
		any(
			isKept(viewer, 'focus_points.driver_id'),
			both(
				plain('focus_points.set_by = ?', viewer.personId),
				isAdmittedBy(viewer, 'focus_points.driver_id', someOfLayout('focus_points.layout_id'))
			),
			isAdmittedBy(viewer, 'focus_points.driver_id', wholeLayout('focus_points.layout_id'))
		)
	);
}

/** `focus_points` that the viewer may close, drop and open again. */
export function keptFocus(db: Knex, viewer: Viewer): Knex.Raw {
	return raw(
		db,
		any(
			isKept(viewer, 'focus_points.driver_id'),
			both(
				plain('focus_points.set_by = ?', viewer.personId),
				isAdmittedBy(viewer, 'focus_points.driver_id', someOfLayout('focus_points.layout_id'))
			)
		)
	);
}

/** `people` on whose laps on the layout the viewer may write notes and set a focus: oneself, minors in one's care, and who admits one. */
export function coachedPeople(db: Knex, viewer: Viewer, layoutId: number): Knex.Raw {
	const admitted = isAdmittedBy(viewer, 'people.id', someOfLayout('?'));
	const places = someOfLayout('?').split('?').length - 1;
	return raw(
		db,
		any(isKept(viewer, 'people.id'), {
			sql: admitted.sql,
			bindings: [...admitted.bindings, ...Array<number>(places).fill(layoutId)]
		})
	);
}

/**
 * `debriefs` joined with `runs` that the viewer may see: the author's while they may see the run, and, once sent, the driver's and
 * their guardian's.
 */
export function seenDebriefs(db: Knex, viewer: Viewer): Knex.Raw {
	const kept = isKept(viewer, 'debriefs.driver_id');
	return db.raw(
		`(debriefs.deleted_at IS NULL AND ((debriefs.author_id = ? AND ?) OR (debriefs.sent_at IS NOT NULL AND ${kept.sql})))`,
		[viewer.personId, seenRuns(db, viewer), ...kept.bindings]
	);
}

/** `debriefs` joined with `runs` that the viewer writes, deleted or not. */
export function writtenDebriefs(db: Knex, viewer: Viewer): Knex.Raw {
	return db.raw('(debriefs.author_id = ? AND ?)', [viewer.personId, seenRuns(db, viewer)]);
}

/** Is the viewer the driver of `debriefs`, or their guardian. */
export function ownDebriefs(db: Knex, viewer: Viewer): Knex.Raw {
	return raw(db, isKept(viewer, 'debriefs.driver_id'));
}
