import type { Knex } from 'knex';
import { z } from 'zod';
import type { NotebookPage, NotebookView, PersonHead } from '../../schemas/views.ts';
import { US_PER_S } from '../../units.ts';
import { seenOwners, seenRuns } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { listLayoutHeads } from '../db/layoutHeads.ts';
import { encodePublicId } from '../db/publicId.ts';
import { listFoundRuns, seenRunRows, toRunListItem } from '../db/runRepository.ts';
import { listFoundUploads, listRunIds, seenUploadRows, toUploadHead } from '../db/uploadRepository.ts';
import { notFound } from '../http/notFound.ts';
import { loadPageDetail, type PageKey } from './notebookProgress.ts';

const LATEST_RUNS = 8;
const MOST_PAGES = 24;
/** Pages that carry progress and a suggestion: what fits a screen; the others are one click away. */
const DETAILED_PAGES = 4;
const OPEN_UPLOADS = 12;
const REFUSED_SHOWN_DAYS = 7;

/**
 * A driver's home.
 *
 * @param personId whose; the viewer's own when absent
 * @throws 404 when the viewer may see nothing of that person
 */
export async function loadNotebook(viewer: Viewer, personId?: string): Promise<NotebookView> {
	const db = database();
	const owners = await seenOwners(db, viewer);
	const people = await listPeople(db, owners);
	const driver =
		personId === undefined
			? people.get(viewer.personId)
			: [...people.values()].find(({ head }) => head.id === personId);
	if (!driver) notFound();
	const ofDriver = () => seenRunRows(db, viewer).where('runs.owner_id', driver.id);
	const [pages, latest, totals, openUploads] = await Promise.all([
		listPages(db, viewer, driver.id),
		listFoundRuns(
			ofDriver()
				.orderBy([
					{ column: 'runs.sort_at', order: 'desc' },
					{ column: 'runs.id', order: 'desc' }
				])
				.limit(LATEST_RUNS)
		),
		db('runs')
			.where('runs.owner_id', driver.id)
			.whereNotNull('runs.analysis_id')
			.where(seenRuns(db, viewer))
			.count<{ total: number }[]>({ total: '*' }),
		driver.id === viewer.personId ? listOpenUploads(db, viewer) : []
	]);
	const layouts = await listLayoutHeads(db, viewer, [
		...pages.map(({ layout_id }) => layout_id),
		...latest.map(({ layout_id }) => layout_id)
	]);
	const details = await Promise.all(pages.slice(0, DETAILED_PAGES).map((page) => loadPageDetail(db, viewer, page)));
	return {
		driver: driver.head,
		own: driver.id === viewer.personId,
		pages: pages.flatMap((page, i): NotebookPage[] => {
			const layout = layouts.get(page.layout_id);
			if (!layout) return [];
			return [{ ...toPage(page), layout, ...(details[i] ?? { progress: [], suggestion: null }) }];
		}),
		latestRuns: latest.flatMap((row) => {
			const layout = layouts.get(row.layout_id);
			return layout ? [toRunListItem(row, layout, viewer)] : [];
		}),
		totalRuns: totals[0].total,
		openUploads,
		others: [...people.values()].filter(({ id }) => id !== viewer.personId).map(({ head }) => head)
	};
}

async function listPeople(db: Knex, ids: readonly number[]): Promise<Map<number, { id: number; head: PersonHead }>> {
	const rows = await db('people')
		.whereIn('id', ids)
		.orderBy('name')
		.select<{ id: number; public_id: Buffer; name: string }[]>('id', 'public_id', 'name');
	return new Map(rows.map(({ id, public_id, name }) => [id, { id, head: { id: encodePublicId(public_id), name } }]));
}

const pageRowSchema = z.object({
	layout_id: z.number(),
	car_id: z.number().nullable(),
	car_public_id: z.instanceof(Buffer).nullable(),
	car_name: z.string().nullable(),
	runs: z.number(),
	last_run_id: z.number(),
	last_run_public_id: z.instanceof(Buffer),
	last_started_at: z.date().nullable(),
	best_run_public_id: z.instanceof(Buffer).nullable(),
	best_lap_public_id: z.instanceof(Buffer).nullable(),
	best_time_us: z.number().nullable(),
	theoretical_best_us: z.number().nullable()
});
type PageRow = z.infer<typeof pageRowSchema> & PageKey;

/** The driver's layouts and cars, the one driven last first, with the best clean lap of each. */
async function listPages(db: Knex, viewer: Viewer, driverId: number): Promise<PageRow[]> {
	const ranked = db('runs')
		.where('runs.owner_id', driverId)
		.whereNotNull('runs.analysis_id')
		.where(seenRuns(db, viewer))
		.select(
			'runs.*',
			db.raw('COUNT(*) OVER (PARTITION BY layout_id, car_id) AS runs_here'),
			db.raw('MIN(theoretical_best_us) OVER (PARTITION BY layout_id, car_id) AS theoretical_here'),
			db.raw('ROW_NUMBER() OVER (PARTITION BY layout_id, car_id ORDER BY sort_at DESC, id DESC) AS newest'),
			db.raw(
				`FIRST_VALUE(IF(best_is_clean, id, NULL)) OVER (PARTITION BY layout_id, car_id
					ORDER BY best_is_clean DESC, best_time_us IS NULL, best_time_us, id) AS best_run_id`
			)
		)
		.as('ranked');
	const found: unknown = await db
		.from(ranked)
		.leftJoin('cars', 'cars.id', 'ranked.car_id')
		.leftJoin('runs as best_runs', 'best_runs.id', 'ranked.best_run_id')
		.leftJoin('laps', 'laps.id', 'best_runs.best_lap_id')
		.where('ranked.newest', 1)
		.orderBy([
			{ column: 'ranked.sort_at', order: 'desc' },
			{ column: 'ranked.id', order: 'desc' }
		])
		.limit(MOST_PAGES)
		.select({
			layout_id: 'ranked.layout_id',
			car_id: 'ranked.car_id',
			car_public_id: 'cars.public_id',
			car_name: 'cars.name',
			runs: 'ranked.runs_here',
			last_run_id: 'ranked.id',
			last_run_public_id: 'ranked.public_id',
			last_started_at: 'ranked.started_at',
			best_run_public_id: 'best_runs.public_id',
			best_lap_public_id: 'laps.public_id',
			best_time_us: 'laps.time_us',
			theoretical_best_us: 'ranked.theoretical_here'
		});
	return z
		.array(pageRowSchema)
		.parse(found)
		.map((row) => ({ ...row, driverId }));
}

function toPage(row: PageRow): Omit<NotebookPage, 'layout' | 'progress' | 'suggestion'> {
	return {
		car:
			row.car_public_id && row.car_name !== null ? { id: encodePublicId(row.car_public_id), name: row.car_name } : null,
		runs: row.runs,
		lastRunAt: row.last_started_at?.toISOString() ?? null,
		lastRunId: encodePublicId(row.last_run_public_id),
		bestLap:
			row.best_run_public_id && row.best_lap_public_id && row.best_time_us !== null
				? {
						id: encodePublicId(row.best_lap_public_id),
						runId: encodePublicId(row.best_run_public_id),
						timeS: row.best_time_us / US_PER_S
					}
				: null,
		theoreticalBestS: row.theoretical_best_us === null ? null : row.theoretical_best_us / US_PER_S
	};
}

async function listOpenUploads(db: Knex, viewer: Viewer): Promise<NotebookView['openUploads']> {
	const uploads = await listFoundUploads(
		seenUploadRows(db, viewer)
			.where('uploads.owner_id', viewer.personId)
			.where((open) =>
				open
					.whereIn('uploads.state', ['stored', 'reading', 'needs_answer'])
					.orWhere((refused) =>
						refused
							.where('uploads.state', 'refused')
							.where('uploads.created_at', '>', db.raw('CURRENT_TIMESTAMP(3) - INTERVAL ? DAY', [REFUSED_SHOWN_DAYS]))
					)
			)
			.orderBy('uploads.created_at', 'desc')
			.limit(OPEN_UPLOADS)
	);
	const runIds = await listRunIds(
		db,
		uploads.map(({ id }) => id)
	);
	return uploads.map((upload) => toUploadHead(upload, runIds.get(upload.id) ?? []));
}
