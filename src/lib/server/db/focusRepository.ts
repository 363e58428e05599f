import type { Knex } from 'knex';
import { z } from 'zod';
import { lapKindSchema, type CornerMetrics } from '../../schemas/analysisDocument.ts';
import { lapReasonSchema } from '../../schemas/codes.ts';
import { focusStateSchema } from '../../schemas/focus.ts';
import { targetSchema } from '../../schemas/target.ts';
import { conditionsSchema } from '../../schemas/views.ts';
import { US_PER_S } from '../../units.ts';
import { keptFocus, seenFocus, seenNotes } from '../access/coaching.ts';
import { seenRuns } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { fromMetricsRow, METRIC_COLUMN_LIST } from './metricsRow.ts';

const buffer = z.instanceof(Buffer);

const focusRowSchema = z.object({
	id: z.number(),
	public_id: buffer,
	driver_id: z.number(),
	driver_public_id: buffer,
	driver_name: z.string(),
	setter_public_id: buffer.nullable(),
	setter_name: z.string().nullable(),
	layout_id: z.number(),
	car_id: z.number().nullable(),
	car_public_id: buffer.nullable(),
	car_name: z.string().nullable(),
	corner_id: z.number().nullable(),
	corner_public_id: buffer.nullable(),
	corner_name: z.string().nullable(),
	corner_number: z.number().nullable(),
	note_public_id: buffer.nullable(),
	note_body: z.string().nullable(),
	note_start_m: z.number().nullable(),
	note_end_m: z.number().nullable(),
	target: targetSchema,
	state: focusStateSchema,
	set_at: z.date(),
	closed_at: z.date().nullable(),
	may_change: z.number()
});
export type FoundFocus = z.infer<typeof focusRowSchema>;

/** Focus points that the viewer may see, open ones first; the caller adds which ones. */
export function seenFocusRows(db: Knex, viewer: Viewer): Knex.QueryBuilder {
	return db('focus_points')
		.join('layouts', 'layouts.id', 'focus_points.layout_id')
		.join('people as drivers', 'drivers.id', 'focus_points.driver_id')
		.leftJoin('people as setters', 'setters.id', 'focus_points.set_by')
		.leftJoin('cars', 'cars.id', 'focus_points.car_id')
		.leftJoin('corners', 'corners.id', 'focus_points.corner_id')
		.leftJoin('zone_notes', (on) => on.on('zone_notes.id', 'focus_points.zone_note_id').andOn(seenNotes(db, viewer)))
		.where(seenFocus(db, viewer))
		.orderByRaw("FIELD(focus_points.state, 'open', 'met', 'dropped')")
		.orderBy('focus_points.set_at', 'desc')
		.orderBy('focus_points.id')
		.select(
			'focus_points.id',
			'focus_points.public_id',
			'focus_points.driver_id',
			'focus_points.layout_id',
			'focus_points.car_id',
			'focus_points.corner_id',
			'focus_points.target',
			'focus_points.state',
			'focus_points.set_at',
			'focus_points.closed_at',
			{
				driver_public_id: 'drivers.public_id',
				driver_name: 'drivers.name',
				setter_public_id: 'setters.public_id',
				setter_name: 'setters.name',
				car_public_id: 'cars.public_id',
				car_name: 'cars.name',
				corner_public_id: 'corners.public_id',
				corner_name: 'corners.name',
				note_public_id: 'zone_notes.public_id',
				note_body: 'zone_notes.body',
				note_start_m: 'zone_notes.start_m',
				note_end_m: 'zone_notes.end_m'
			},
			db.raw(
				`(SELECT corner_places.number FROM corner_maps JOIN corner_places ON corner_places.corner_map_id = corner_maps.id
					WHERE corner_maps.layout_id = layouts.id AND corner_maps.version = layouts.map_version
						AND corner_places.corner_id = focus_points.corner_id) AS corner_number`
			),
			db.raw('? AS may_change', [keptFocus(db, viewer)])
		);
}

/** Runs a query made by `seenFocusRows`. */
export async function listFoundFocus(query: Knex.QueryBuilder): Promise<FoundFocus[]> {
	const rows: unknown = await query;
	return z.array(focusRowSchema).parse(rows);
}

const runRowSchema = z.object({
	run_id: z.number(),
	run_public_id: buffer,
	started_at: z.date().nullable(),
	sort_at: z.date(),
	conditions: conditionsSchema,
	run_of_day: z.number(),
	length_m: z.number()
});
export type ScoredRunRow = z.infer<typeof runRowSchema>;

/** Analysed runs of a driver on a layout in one car that the viewer may see, oldest first. */
export async function listRunsOf(
	db: Knex,
	viewer: Viewer,
	of: { driverId: number; layoutId: number; carId: number | null; most: number }
): Promise<ScoredRunRow[]> {
	const found: unknown = await db('runs')
		.join('layouts', 'layouts.id', 'runs.layout_id')
		.where({ 'runs.owner_id': of.driverId, 'runs.layout_id': of.layoutId })
		.whereRaw('runs.car_id <=> ?', [of.carId])
		.whereNotNull('runs.analysis_id')
		.where(seenRuns(db, viewer))
		.orderBy([
			{ column: 'runs.sort_at', order: 'desc' },
			{ column: 'runs.id', order: 'desc' }
		])
		.limit(of.most)
		.select(
			{ run_id: 'runs.id', run_public_id: 'runs.public_id', length_m: 'layouts.length_m' },
			'runs.started_at',
			'runs.sort_at',
			'runs.conditions',
			db.raw(`(SELECT COUNT(*) FROM runs AS same_day WHERE same_day.owner_id = runs.owner_id AND same_day.deleted_at IS NULL
				AND same_day.sort_at >= DATE(runs.sort_at) AND (same_day.sort_at < runs.sort_at
					OR (same_day.sort_at = runs.sort_at AND same_day.id <= runs.id))) AS run_of_day`)
		);
	return z.array(runRowSchema).parse(found).reverse();
}

const lapRowSchema = z.object({
	run_id: z.number(),
	number: z.number(),
	kind: lapKindSchema,
	time_us: z.number(),
	plus_minus_us: z.number(),
	is_clean: z.number(),
	reasons: z.array(lapReasonSchema)
});

/** Laps of one run as scoring needs them. */
export interface LapPasses {
	laps: {
		number: number;
		kind: z.infer<typeof lapKindSchema>;
		clean: boolean;
		reasons: z.infer<typeof lapReasonSchema>[];
		timeS: number;
		plusMinusS: number;
	}[];
	/** metrics of each lap's pass, by key of the corner */
	passes: Map<number, CornerMetrics[]>;
}

/** Laps of runs that the caller has been shown, with their passes of some corners; keyed by run, in driving order. */
export async function listPasses(
	db: Knex,
	runIds: readonly number[],
	cornerIds: readonly number[]
): Promise<Map<number, LapPasses>> {
	const byRun = new Map<number, LapPasses>();
	if (runIds.length === 0) return byRun;
	const [laps, metrics]: [unknown, Record<string, unknown>[]] = await Promise.all([
		db('laps').whereIn('run_id', runIds).orderBy(['run_id', 'ordinal']).select(Object.keys(lapRowSchema.shape)),
		cornerIds.length === 0
			? []
			: db('laps')
					.join('lap_corner_metrics', 'lap_corner_metrics.lap_id', 'laps.id')
					.whereIn('laps.run_id', runIds)
					.whereIn('lap_corner_metrics.corner_id', cornerIds)
					.orderBy(['laps.run_id', 'laps.ordinal'])
					.select(
						{ of_run: 'laps.run_id', of_lap: 'laps.number' },
						'lap_corner_metrics.corner_id',
						...METRIC_COLUMN_LIST
					)
	]);
	const runOf = (id: number): LapPasses => {
		const run = byRun.get(id) ?? { laps: [], passes: new Map() };
		byRun.set(id, run);
		return run;
	};
	for (const row of z.array(lapRowSchema).parse(laps)) {
		runOf(row.run_id).laps.push({
			number: row.number,
			kind: row.kind,
			clean: row.is_clean === 1,
			reasons: row.reasons,
			timeS: row.time_us / US_PER_S,
			plusMinusS: row.plus_minus_us / US_PER_S
		});
	}
	for (const row of metrics) {
		const { passes } = runOf(Number(row.of_run));
		const ofCorner = passes.get(Number(row.corner_id)) ?? [];
		passes.set(Number(row.corner_id), ofCorner);
		ofCorner.push(fromMetricsRow(Number(row.of_lap), row));
	}
	return byRun;
}

/** The pass of one corner on one lap that the caller has been shown. */
export async function findPass(db: Knex, lapId: number, cornerId: number): Promise<CornerMetrics | null> {
	const row: Record<string, unknown> | undefined = await db('lap_corner_metrics')
		.where({ lap_id: lapId, corner_id: cornerId })
		.first(...METRIC_COLUMN_LIST);
	return row ? fromMetricsRow(0, row) : null;
}
