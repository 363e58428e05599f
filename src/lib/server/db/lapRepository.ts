import type { Knex } from 'knex';
import { z } from 'zod';
import type { LapGrid } from '../../analysis/model.ts';
import { lapKindSchema, type CornerMetrics } from '../../schemas/analysisDocument.ts';
import { lapReasonSchema } from '../../schemas/codes.ts';
import { conditionsSchema, placeSchema, type LapHead, type LapRow } from '../../schemas/views.ts';
import { US_PER_S } from '../../units.ts';
import { seenRuns } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { fromMetricsRow, METRIC_COLUMN_LIST } from './metricsRow.ts';
import { encodePublicId } from './publicId.ts';
import { TRACE_CHANNEL_NAMES, type TraceChannel } from './traceChannels.ts';
import { decodeTrace, type StoredColumn } from './traceCodec.ts';

const buffer = z.instanceof(Buffer);

/** What `seenLaps` selects. */
export const headRowSchema = z.object({
	lap_id: z.number(),
	lap_public_id: buffer,
	number: z.number(),
	kind: lapKindSchema,
	time_us: z.number(),
	plus_minus_us: z.number(),
	is_clean: z.number(),
	reasons: z.array(lapReasonSchema),
	grid_length_m: z.number().nullable(),
	grid_margin_m: z.number().nullable(),
	run_id: z.number(),
	run_public_id: buffer,
	owner_id: z.number(),
	layout_id: z.number(),
	car_id: z.number().nullable(),
	place: placeSchema,
	conditions: conditionsSchema,
	started_at: z.date().nullable(),
	sort_at: z.date(),
	analysis_id: z.number(),
	path_version: z.number(),
	map_version: z.number(),
	driver_public_id: buffer,
	driver_name: z.string(),
	car_public_id: buffer.nullable(),
	car_name: z.string().nullable(),
	shelf_name: z.string().nullable()
});

/** A lap with all keys that joining it with others needs. */
export type FoundLap = z.infer<typeof headRowSchema>;

/**
 * Laps that the viewer may see, with what stands beside a lap wherever it is named. The caller adds which ones.
 *
 * The name on a shelf is that of the viewer's own shelf, of an organisation of theirs, or of the lap's owner.
 */
export function seenLaps(db: Knex, viewer: Viewer): Knex.QueryBuilder {
	const organisations = viewer.memberships.map(({ organisationId }) => organisationId);
	const shelf = db
		.select('shelf_references.name')
		.from('shelf_references')
		.whereRaw('shelf_references.lap_id = laps.id')
		.whereNull('shelf_references.removed_at')
		.where((mine) =>
			mine
				.where('shelf_references.person_id', viewer.personId)
				.orWhereRaw('shelf_references.person_id = runs.owner_id')
				.orWhereIn('shelf_references.organisation_id', organisations)
		)
		.limit(1)
		.as('shelf_name');
	return db('laps')
		.join('runs', 'runs.id', 'laps.run_id')
		.join('analyses', 'analyses.id', 'laps.analysis_id')
		.join('people', 'people.id', 'runs.owner_id')
		.leftJoin('cars', 'cars.id', 'runs.car_id')
		.where(seenRuns(db, viewer))
		.select(
			{
				lap_id: 'laps.id',
				lap_public_id: 'laps.public_id',
				run_public_id: 'runs.public_id',
				driver_public_id: 'people.public_id',
				driver_name: 'people.name',
				car_public_id: 'cars.public_id',
				car_name: 'cars.name'
			},
			'laps.number',
			'laps.kind',
			'laps.time_us',
			'laps.plus_minus_us',
			'laps.is_clean',
			'laps.reasons',
			'laps.grid_length_m',
			'laps.grid_margin_m',
			'laps.run_id',
			'runs.owner_id',
			'runs.layout_id',
			'runs.car_id',
			'runs.place',
			'runs.conditions',
			'runs.started_at',
			'runs.sort_at',
			'laps.analysis_id',
			'analyses.path_version',
			'analyses.map_version',
			shelf
		);
}

/** Runs a query made by `seenLaps`. */
export async function listFoundLaps(query: Knex.QueryBuilder): Promise<FoundLap[]> {
	const rows: unknown = await query;
	return z.array(headRowSchema).parse(rows);
}

export function toLapHead(row: FoundLap, viewer: Viewer): LapHead {
	return {
		id: encodePublicId(row.lap_public_id),
		runId: encodePublicId(row.run_public_id),
		number: row.number,
		kind: row.kind,
		timeS: row.time_us / US_PER_S,
		clean: row.is_clean === 1,
		reasons: row.reasons,
		plusMinusS: row.plus_minus_us / US_PER_S,
		driver: { id: encodePublicId(row.driver_public_id), name: row.driver_name },
		own: row.owner_id === viewer.personId,
		car:
			row.car_public_id && row.car_name !== null ? { id: encodePublicId(row.car_public_id), name: row.car_name } : null,
		place: row.place,
		conditions: row.conditions,
		startedAt: row.started_at?.toISOString() ?? null,
		shelfName: row.shelf_name
	};
}

const lapRowSchema = z.object({
	public_id: buffer,
	number: z.number(),
	kind: lapKindSchema,
	start_us: z.number(),
	time_us: z.number(),
	length_m: z.number().nullable(),
	is_clean: z.number(),
	reasons: z.array(lapReasonSchema),
	plus_minus_us: z.number(),
	cell_us: z.array(z.number().nullable()),
	run_id: z.number()
});

/** Laps of runs that the caller has been shown, in driving order; keyed by run. */
export async function listLapRows(db: Knex, runIds: readonly number[]): Promise<Map<number, LapRow[]>> {
	const found: unknown = await db('laps')
		.whereIn('run_id', runIds)
		.orderBy(['run_id', 'ordinal'])
		.select(Object.keys(lapRowSchema.shape));
	const byRun = new Map<number, LapRow[]>();
	for (const row of z.array(lapRowSchema).parse(found)) {
		const rows = byRun.get(row.run_id) ?? [];
		byRun.set(row.run_id, rows);
		rows.push({
			id: encodePublicId(row.public_id),
			number: row.number,
			kind: row.kind,
			startS: row.start_us / US_PER_S,
			timeS: row.time_us / US_PER_S,
			lengthM: row.length_m,
			clean: row.is_clean === 1,
			reasons: row.reasons,
			plusMinusS: row.plus_minus_us / US_PER_S,
			cellS: row.cell_us.map((us) => (us === null ? null : us / US_PER_S))
		});
	}
	return byRun;
}

/** Metrics of every lap of a run, and which laps were clean; lap numbers are those within the run. */
export interface RunMetrics {
	metrics: CornerMetrics[];
	cleanLaps: number[];
}

/** Metrics of the runs' laps, in driving order; keyed by run. */
export async function listMetrics(db: Knex, runIds: readonly number[]): Promise<Map<number, RunMetrics>> {
	const rows: Record<string, unknown>[] = await db('laps')
		.join('lap_corner_metrics', 'lap_corner_metrics.lap_id', 'laps.id')
		.whereIn('laps.run_id', runIds)
		.orderBy(['laps.run_id', 'laps.ordinal', 'lap_corner_metrics.number'])
		.select(
			{ lap_run_id: 'laps.run_id', lap_number: 'laps.number', lap_is_clean: 'laps.is_clean' },
			...METRIC_COLUMN_LIST
		);
	const byRun = new Map<number, RunMetrics>();
	for (const row of rows) {
		const [runId, lap] = [Number(row.lap_run_id), Number(row.lap_number)];
		const run = byRun.get(runId) ?? { metrics: [], cleanLaps: [] };
		byRun.set(runId, run);
		run.metrics.push(fromMetricsRow(lap, row));
		if (row.lap_is_clean === 1 && run.cleanLaps[run.cleanLaps.length - 1] !== lap) run.cleanLaps.push(lap);
	}
	return byRun;
}

const traceRowSchema = z.object({
	lap_id: z.number(),
	channel: z.string(),
	version: z.number(),
	scale: z.number(),
	payload: buffer
});

/** Stored columns of laps, keyed by lap and channel; all channels, or those asked for. */
export async function listTraces(
	db: Knex,
	lapIds: readonly number[],
	channels: readonly TraceChannel[] = TRACE_CHANNEL_NAMES
): Promise<Map<number, Map<string, StoredColumn>>> {
	const found: unknown = await db('lap_traces')
		.whereIn('lap_id', lapIds)
		.whereIn('channel', channels)
		.select('lap_id', 'channel', 'version', 'scale', 'payload');
	const byLap = new Map<number, Map<string, StoredColumn>>();
	for (const { lap_id, channel, ...stored } of z.array(traceRowSchema).parse(found)) {
		const columns = byLap.get(lap_id) ?? new Map<string, StoredColumn>();
		byLap.set(lap_id, columns);
		columns.set(channel, stored);
	}
	return byLap;
}

/** The lap's grid out of its stored columns, or undefined for a lap that was not laid on the grid. */
export function gridOf(lap: FoundLap, columns: ReadonlyMap<string, StoredColumn> | undefined): LapGrid | undefined {
	const timeS = columns?.get('timeS');
	if (!columns || !timeS || lap.grid_length_m === null || lap.grid_margin_m === null) return undefined;
	const make = (length: number) => new Float64Array(length);
	const column = (name: TraceChannel): Float64Array | null => {
		const stored = columns.get(name);
		return stored ? decodeTrace(stored, make) : null;
	};
	const time = decodeTrace(timeS, make);
	return {
		lapNumber: lap.number,
		lengthM: lap.grid_length_m,
		marginM: lap.grid_margin_m,
		lapTimeS: lap.time_us / US_PER_S,
		timeS: time,
		speedKmh: column('speedKmh') ?? new Float64Array(time.length).fill(NaN),
		brakePct: column('brakePct'),
		throttlePct: column('throttlePct'),
		steeringDeg: column('steeringDeg'),
		offsetM: column('offsetM'),
		curvaturePerM: column('curvaturePerM'),
		accLongMps2: column('accLongMps2'),
		gear: column('gear'),
		engineSpeedRpm: column('engineSpeedRpm')
	};
}
