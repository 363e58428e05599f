import type { Knex } from 'knex';
import type { GrantScope, Sees, ShareOption } from '../../../schemas/invitations.ts';
import { atLayout, runName } from '../../../texts/runs.ts';
import { keptPeople } from '../../access/seenRuns.ts';
import { seenLayouts } from '../../access/seenLayouts.ts';
import type { Viewer } from '../../access/viewer.ts';
import { listLayoutHeads } from '../../db/layoutHeads.ts';
import { decodePublicId, encodePublicId } from '../../db/publicId.ts';
import { listFoundRuns, seenRunRows, toRunListItem } from '../../db/runRepository.ts';

const RUNS_OFFERED = 20;
const ASKABLE = 60;

/** A grant's place in the database. */
export interface GrantPlace {
	scope: GrantScope;
	circuitId: number | null;
	eventId: number | null;
	runId: number | null;
}

/** What a person may let somebody see of their own laps and those of minors in their care, widest first. */
export async function listShareOptions(db: Knex, viewer: Viewer): Promise<ShareOption[]> {
	const owners = await keptPeople(db, viewer);
	const own = () => db('runs').whereIn('runs.owner_id', owners).whereNull('runs.deleted_at');
	const [circuits, events, runs] = await Promise.all([
		own()
			.join('layouts', 'layouts.id', 'runs.layout_id')
			.join('circuits', 'circuits.id', 'layouts.circuit_id')
			.distinct<{ public_id: Buffer; name: string }[]>('circuits.public_id', 'circuits.name')
			.orderBy('circuits.name'),
		own()
			.join('events', 'events.id', 'runs.event_id')
			.distinct<{ public_id: Buffer; name: string }[]>('events.public_id', 'events.name')
			.orderBy('events.name'),
		listFoundRuns(
			seenRunRows(db, viewer).whereIn('runs.owner_id', owners).orderBy('runs.sort_at', 'desc').limit(RUNS_OFFERED)
		)
	]);
	const layouts = await listLayoutHeads(
		db,
		viewer,
		runs.map(({ layout_id }) => layout_id)
	);
	return [
		{ value: 'all', label: 'all runs' },
		...circuits.map(({ public_id, name }) => ({
			value: `circuit:${encodePublicId(public_id)}`,
			label: `runs at ${name}`
		})),
		...events.map(({ public_id, name }) => ({ value: `event:${encodePublicId(public_id)}`, label: `runs of ${name}` })),
		...runs.flatMap((row) => {
			const layout = layouts.get(row.layout_id);
			if (!layout) return [];
			const item = toRunListItem(row, layout, viewer);
			const whose = item.own ? '' : `${item.driver.name}, `;
			return [{ value: `run:${item.id}`, label: `one run: ${whose}${runName(item)}, ${atLayout(layout)}` }];
		})
	];
}

/** What somebody can ask to see, beside "all": circuits that they see, and events of their organisations. */
export async function listAskable(db: Knex, viewer: Viewer, owners: readonly number[]): Promise<ShareOption[]> {
	const organisations = viewer.memberships.map(({ organisationId }) => organisationId);
	const [circuits, events] = await Promise.all([
		db('layouts')
			.join('circuits', 'circuits.id', 'layouts.circuit_id')
			.where(seenLayouts(db, viewer, owners))
			.distinct<{ public_id: Buffer; name: string }[]>('circuits.public_id', 'circuits.name')
			.orderBy('circuits.name')
			.limit(ASKABLE),
		db('events')
			.whereIn('organisation_id', organisations)
			.orderBy('id', 'desc')
			.limit(ASKABLE)
			.select<{ public_id: Buffer; name: string }[]>('public_id', 'name')
	]);
	return [
		...circuits.map(({ public_id, name }) => ({
			value: `circuit:${encodePublicId(public_id)}`,
			label: `runs at ${name}`
		})),
		...events.map(({ public_id, name }) => ({ value: `event:${encodePublicId(public_id)}`, label: `runs of ${name}` }))
	];
}

/**
 * Where a choice of the form leads, for laps of `ownerId`: a run must be theirs; a circuit or an event must be one that they drove
 * at, or that they were asked for.
 *
 * @returns null for "none"; undefined for what is not theirs to share
 */
export async function findPlace(
	db: Knex | Knex.Transaction,
	ownerId: number,
	sees: Sees,
	asked: { circuitId: number | null; eventId: number | null }
): Promise<GrantPlace | null | undefined> {
	const nowhere = { circuitId: null, eventId: null, runId: null };
	if (sees.id === null) return sees.scope === 'none' ? null : { scope: 'all', ...nowhere };
	const publicId = decodePublicId(sees.id);
	const own = () => db('runs').where({ 'runs.owner_id': ownerId }).whereNull('runs.deleted_at');
	if (sees.scope === 'run') {
		const run = await own().where({ 'runs.public_id': publicId }).first<{ id: number } | undefined>('runs.id');
		return run && { scope: 'run', ...nowhere, runId: run.id };
	}
	if (sees.scope === 'circuit') {
		const circuit = await db('circuits').where({ public_id: publicId }).first<{ id: number } | undefined>('id');
		if (!circuit) return undefined;
		const drove: unknown =
			circuit.id === asked.circuitId ||
			(await own().join('layouts', 'layouts.id', 'runs.layout_id').where({ circuit_id: circuit.id }).first('runs.id'));
		return drove ? { scope: 'circuit', ...nowhere, circuitId: circuit.id } : undefined;
	}
	const event = await db('events').where({ public_id: publicId }).first<{ id: number } | undefined>('id');
	if (!event) return undefined;
	const drove: unknown = event.id === asked.eventId || (await own().where({ event_id: event.id }).first('runs.id'));
	return drove ? { scope: 'event', ...nowhere, eventId: event.id } : undefined;
}
