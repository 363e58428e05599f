import type { Knex } from 'knex';
import { median } from 'simple-statistics';
import { z } from 'zod';
import type { Cell } from '../../schemas/analysisDocument.ts';
import type { NotebookPage } from '../../schemas/views.ts';
import { US_PER_S } from '../../units.ts';
import { seenRuns } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { listFoundLaps, seenLaps } from '../db/lapRepository.ts';
import { getCornerMap } from '../db/layoutRepository.ts';
import { decodePublicId, encodePublicId } from '../db/publicId.ts';
import { listReferences, suggestPair } from './chooseReference.ts';

/** Runs that a page's progress looks back on. */
const RUNS_BACK = 8;

export interface PageKey {
	driverId: number;
	layout_id: number;
	car_id: number | null;
	last_run_id: number;
}

/** Progress by corner, and what to lay on what, of one page of the notebook. */
export async function loadPageDetail(
	db: Knex,
	viewer: Viewer,
	page: PageKey
): Promise<Pick<NotebookPage, 'progress' | 'suggestion'>> {
	const lastLaps = await listFoundLaps(
		seenLaps(db, viewer).where('laps.run_id', page.last_run_id).orderBy('laps.ordinal')
	);
	const [first] = lastLaps;
	if (!first) return { progress: [], suggestion: null };
	const version = { layoutId: page.layout_id, pathVersion: first.path_version, mapVersion: first.map_version };
	const [map, points, references] = await Promise.all([
		getCornerMap(db, version),
		listCellTimes(db, viewer, page, version.mapVersion),
		listReferences(db, viewer, { ...version, carId: page.car_id })
	]);
	const suggestion = suggestPair(viewer, lastLaps, references);
	const reference = suggestion ? await findCells(db, suggestion.reference.id) : null;
	const names = new Map(map.corners.map(({ corner }) => [corner.number, corner.name]));
	return {
		suggestion,
		progress: map.cells.map((cell: Cell, i) => ({
			corners: cell.corners,
			names: cell.corners.map((number) => names.get(number) ?? null),
			points: points.map(({ runId, startedAt, cells }) => {
				const times = cells.flatMap((lap) => lap[i] ?? []);
				return {
					runId,
					startedAt,
					bestS: times.length > 0 ? Math.min(...times) / US_PER_S : null,
					medianS: times.length > 0 ? median(times) / US_PER_S : null
				};
			}),
			referenceS: reference?.[i] == null ? null : reference[i] / US_PER_S
		}))
	};
}

const cellsSchema = z.array(z.number().nullable());
const lapRowSchema = z.object({
	run_id: z.number(),
	public_id: z.instanceof(Buffer),
	started_at: z.date().nullable(),
	cell_us: cellsSchema
});

interface RunCells {
	runId: string;
	startedAt: string | null;
	/** of each clean lap, µs by cell */
	cells: (number | null)[][];
}

/** Cell times of the clean laps of the page's last runs that stand on this corner map, oldest run first. */
async function listCellTimes(db: Knex, viewer: Viewer, page: PageKey, mapVersion: number): Promise<RunCells[]> {
	const last = db('runs')
		.join('analyses', 'analyses.id', 'runs.analysis_id')
		.where({ 'runs.owner_id': page.driverId, 'runs.layout_id': page.layout_id, 'analyses.map_version': mapVersion })
		.whereRaw('runs.car_id <=> ?', [page.car_id])
		.where(seenRuns(db, viewer))
		.orderBy([
			{ column: 'runs.sort_at', order: 'desc' },
			{ column: 'runs.id', order: 'desc' }
		])
		.limit(RUNS_BACK)
		.select('runs.id', 'runs.public_id', 'runs.started_at', 'runs.sort_at')
		.as('last_runs');
	const found: unknown = await db
		.from(last)
		.join('laps', 'laps.run_id', 'last_runs.id')
		.where({ 'laps.is_clean': true })
		.orderBy(['last_runs.sort_at', 'last_runs.id', 'laps.ordinal'])
		.select('laps.run_id', 'laps.cell_us', 'last_runs.public_id', 'last_runs.started_at');
	const byRun = new Map<number, RunCells>();
	for (const row of z.array(lapRowSchema).parse(found)) {
		const run = byRun.get(row.run_id) ?? {
			runId: encodePublicId(row.public_id),
			startedAt: row.started_at?.toISOString() ?? null,
			cells: []
		};
		byRun.set(row.run_id, run);
		run.cells.push(row.cell_us);
	}
	return [...byRun.values()];
}

/** Cell times, µs, of a lap that the viewer has been shown. */
async function findCells(db: Knex, lapId: string): Promise<(number | null)[] | null> {
	const row: unknown = await db('laps')
		.where({ public_id: decodePublicId(lapId) })
		.first('cell_us');
	return z.object({ cell_us: cellsSchema }).parse(row).cell_us;
}
