import type { Knex } from 'knex';
import { z } from 'zod';
import type { FocusPoint, FocusRun } from '../../schemas/focus.ts';
import type { InTrayItem } from '../../schemas/inTray.ts';
import { targetText } from '../../texts/targets.ts';
import { US_PER_S } from '../../units.ts';
import { seenOwners } from '../access/seenRuns.ts';
import { readingOrganisations, type Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { listFoundFocus, seenFocusRows } from '../db/focusRepository.ts';
import { listLayoutHeads } from '../db/layoutHeads.ts';
import { encodePublicId } from '../db/publicId.ts';
import { listFoundRuns, seenRunRows, toRunListItem, type FoundRun } from '../db/runRepository.ts';
import { notFound } from '../http/notFound.ts';
import { toFocusPoints } from './focus.ts';
import { findRun } from './loadRun.ts';

/** What was handed over earlier than this waits for nobody any more. */
const LOOKS_BACK_DAYS = 60;
const MOST_RUNS = 60;
/** When a debrief is due that nobody promised for a day. */
const USUAL_PROMISE_H = 48;
const MS_PER_H = 3_600_000;
/** A best lap that moved by less is no news: it is what a driver varies by. */
const NEWS_S = 0.05;

/**
 * Runs of the people whom the viewer coaches that wait for a debrief, oldest promise first, each with what is new since the last run of
 * the same driver on the same layout and car, and what its focus scores say.
 */
export async function loadInTray(viewer: Viewer): Promise<InTrayItem[]> {
	const db = database();
	const coached = await listCoached(db, viewer);
	if (coached.length === 0) return [];
	const rows = await listFoundRuns(
		seenRunRows(db, viewer)
			.whereIn('runs.owner_id', coached)
			.whereRaw('runs.created_at > CURRENT_TIMESTAMP(3) - INTERVAL ? DAY', [LOOKS_BACK_DAYS])
			.whereRaw(
				`NOT EXISTS (SELECT 1 FROM in_tray_marks WHERE in_tray_marks.coach_id = ? AND in_tray_marks.run_id = runs.id
					AND in_tray_marks.closed_at IS NOT NULL)`,
				[viewer.personId]
			)
			.orderBy('runs.sort_at')
			.limit(MOST_RUNS)
	);
	const [promises, layouts, points, previous, drafts] = await Promise.all([
		listPromises(db, viewer, rows),
		listLayoutHeads(
			db,
			viewer,
			rows.map(({ layout_id }) => layout_id)
		),
		openFocusOf(db, viewer, rows),
		listPrevious(db, viewer, rows),
		listDrafts(db, viewer, rows)
	]);
	return rows
		.flatMap((row): InTrayItem[] => {
			const layout = layouts.get(row.layout_id);
			if (!layout) return [];
			const run = toRunListItem(row, layout, viewer);
			const before = previous.get(row.run_id);
			const changeS =
				before === undefined || before.bestS === null || run.bestLap === null ? null : run.bestLap.timeS - before.bestS;
			const focus = points.flatMap((point) => scoreIn(point, run.id));
			const isFirst = before === undefined;
			return [
				{
					run,
					promisedAt:
						promises.get(row.run_id) ?? new Date(row.created_at.getTime() + USUAL_PROMISE_H * MS_PER_H).toISOString(),
					promised: promises.has(row.run_id),
					isFirst,
					changeS,
					focus,
					hasNews: isFirst || focus.length > 0 || (changeS !== null && changeS < -NEWS_S),
					draft: drafts.get(row.run_id) ?? null
				}
			];
		})
		.sort((a, b) => (a.promisedAt < b.promisedAt ? -1 : a.promisedAt > b.promisedAt ? 1 : 0));
}

/**
 * Closes a run in the viewer's in-tray, or puts it back.
 *
 * @throws 404 when the run is not the viewer's to see
 */
export async function setTrayClosed(viewer: Viewer, runId: string, closed: boolean): Promise<void> {
	const db = database();
	await mark(db, viewer, runId, { closed_at: closed ? new Date() : null });
}

/** Says by when the driver was promised a debrief; null takes the promise back. */
export async function promiseDebrief(viewer: Viewer, runId: string, at: Date | null): Promise<void> {
	await mark(database(), viewer, runId, { promised_at: at });
}

async function mark(
	db: Knex,
	viewer: Viewer,
	runId: string,
	change: { closed_at: Date | null } | { promised_at: Date | null }
): Promise<void> {
	const run = (await findRun(db, viewer, runId)) ?? notFound();
	await db('in_tray_marks')
		.insert({ coach_id: viewer.personId, run_id: run.run_id, ...change })
		.onConflict(['coach_id', 'run_id'])
		.merge(Object.keys(change));
}

/**
 * Whose runs the viewer may see, but for themself, and for those who coach the viewer and only lend a run: a coach who lends a reference
 * waits for nothing.
 */
async function listCoached(db: Knex, viewer: Viewer): Promise<number[]> {
	const owners = await seenOwners(db, viewer);
	const organisations = readingOrganisations(viewer);
	return await db('people')
		.whereIn('people.id', owners)
		.whereNot('people.id', viewer.personId)
		.whereNot((lends) =>
			lends
				.whereExists(
					db('grants')
						.where({ 'grants.owner_id': viewer.personId })
						.whereNot({ 'grants.scope': 'run' })
						.whereNull('grants.revoked_at')
						.whereRaw(
							`(grants.grantee_person_id = people.id OR grants.grantee_organisation_id IN (
								SELECT memberships.organisation_id FROM memberships WHERE memberships.person_id = people.id
									AND memberships.role IN ('coach', 'manager') AND memberships.ended_at IS NULL))`
						)
				)
				.whereNotExists(
					db('grants')
						.whereRaw('grants.owner_id = people.id')
						.whereNot({ 'grants.scope': 'run' })
						.whereNull('grants.revoked_at')
						.where((mine) =>
							mine
								.where('grants.grantee_person_id', viewer.personId)
								.orWhereIn('grants.grantee_organisation_id', organisations)
						)
				)
		)
		.pluck<number[]>('people.id');
}

async function listPromises(db: Knex, viewer: Viewer, rows: readonly FoundRun[]): Promise<Map<number, string>> {
	const marks = await db('in_tray_marks')
		.where({ coach_id: viewer.personId })
		.whereIn(
			'run_id',
			rows.map(({ run_id }) => run_id)
		)
		.whereNotNull('promised_at')
		.select<{ run_id: number; promised_at: Date }[]>('run_id', 'promised_at');
	return new Map(marks.map(({ run_id, promised_at }) => [run_id, promised_at.toISOString()]));
}

async function listDrafts(db: Knex, viewer: Viewer, rows: readonly FoundRun[]): Promise<Map<number, string>> {
	const drafts = await db('debriefs')
		.where({ author_id: viewer.personId })
		.whereIn(
			'run_id',
			rows.map(({ run_id }) => run_id)
		)
		.whereNull('sent_at')
		.whereNull('deleted_at')
		.select<{ run_id: number; public_id: Buffer }[]>('run_id', 'public_id');
	return new Map(drafts.map(({ run_id, public_id }) => [run_id, encodePublicId(public_id)]));
}

async function openFocusOf(db: Knex, viewer: Viewer, rows: readonly FoundRun[]): Promise<FocusPoint[]> {
	const drivers = [...new Set(rows.map(({ owner_id }) => owner_id))];
	if (drivers.length === 0) return [];
	const found = await listFoundFocus(
		seenFocusRows(db, viewer).whereIn('focus_points.driver_id', drivers).where('focus_points.state', 'open').limit(200)
	);
	return await toFocusPoints(db, viewer, found);
}

/** What a focus says of one run, beside the scored run before it. */
function scoreIn(point: FocusPoint, runId: string): InTrayItem['focus'] {
	const scored = point.runs.filter((run) => run.scored > 0);
	const at = scored.findIndex((run) => run.run === runId);
	if (at < 0) return [];
	const rate = ({ met, scored: of }: FocusRun) => ({ met, scored: of });
	return [
		{
			id: point.id,
			text: targetText(point.target),
			corner: point.corner && { number: point.corner.number, name: point.corner.name },
			...rate(scored[at]),
			before: at > 0 ? rate(scored[at - 1]) : null,
			proposed: point.proposed && at === scored.length - 1
		}
	];
}

const previousSchema = z.array(
	z.object({ run_id: z.number(), previous_id: z.number(), best_time_us: z.number().nullable() })
);

/** The run before each, of the same driver on the same layout and car. */
async function listPrevious(
	db: Knex,
	viewer: Viewer,
	rows: readonly FoundRun[]
): Promise<Map<number, { bestS: number | null }>> {
	const previous = new Map<number, { bestS: number | null }>();
	if (rows.length === 0) return previous;
	const found: unknown = await seenRunRows(db, viewer)
		.clearSelect()
		.join('runs as waiting', (on) =>
			on.on('waiting.owner_id', 'runs.owner_id').andOn('waiting.layout_id', 'runs.layout_id')
		)
		.whereIn(
			'waiting.id',
			rows.map(({ run_id }) => run_id)
		)
		.whereRaw('runs.car_id <=> waiting.car_id AND runs.sort_at < waiting.sort_at')
		.orderBy('runs.sort_at')
		.select({ run_id: 'waiting.id', previous_id: 'runs.id' }, 'runs.best_time_us');
	for (const row of previousSchema.parse(found)) {
		previous.set(row.run_id, { bestS: row.best_time_us === null ? null : row.best_time_us / US_PER_S });
	}
	return previous;
}
