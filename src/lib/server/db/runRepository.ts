import type { Knex } from 'knex';
import { z } from 'zod';
import { conditionsSchema, intentSchema, placeSchema, type LayoutHead, type RunListItem } from '../../schemas/views.ts';
import { US_PER_S } from '../../units.ts';
import { seenRuns } from '../access/seenRuns.ts';
import type { Viewer } from '../access/viewer.ts';
import { encodePublicId } from './publicId.ts';

const buffer = z.instanceof(Buffer);

const runRowSchema = z.object({
	run_id: z.number(),
	run_public_id: buffer,
	owner_id: z.number(),
	upload_id: z.number().nullable(),
	layout_id: z.number(),
	car_id: z.number().nullable(),
	analysis_id: z.number(),
	started_at: z.date().nullable(),
	sort_at: z.date(),
	created_at: z.date(),
	place: placeSchema,
	conditions: conditionsSchema,
	intent: intentSchema,
	tyre_set: z.string().nullable(),
	fuel_kg: z.number().nullable(),
	timed_laps: z.number(),
	clean_laps: z.number(),
	best_lap_id: z.number().nullable(),
	best_lap_public_id: buffer.nullable(),
	best_time_us: z.number().nullable(),
	best_is_clean: z.number(),
	theoretical_best_us: z.number().nullable(),
	driver_public_id: buffer,
	driver_name: z.string(),
	car_public_id: buffer.nullable(),
	car_name: z.string().nullable(),
	run_of_day: z.number()
});
export type FoundRun = z.infer<typeof runRowSchema>;

/** Analysed runs that the viewer may see; the caller adds which ones and in what order. */
export function seenRunRows(db: Knex, viewer: Viewer): Knex.QueryBuilder {
	return db('runs')
		.join('people', 'people.id', 'runs.owner_id')
		.leftJoin('cars', 'cars.id', 'runs.car_id')
		.leftJoin('laps as best_laps', 'best_laps.id', 'runs.best_lap_id')
		.where(seenRuns(db, viewer))
		.whereNotNull('runs.analysis_id')
		.select(
			{
				run_id: 'runs.id',
				run_public_id: 'runs.public_id',
				best_lap_public_id: 'best_laps.public_id',
				driver_public_id: 'people.public_id',
				driver_name: 'people.name',
				car_public_id: 'cars.public_id',
				car_name: 'cars.name'
			},
			'runs.owner_id',
			'runs.upload_id',
			'runs.layout_id',
			'runs.car_id',
			'runs.analysis_id',
			'runs.started_at',
			'runs.sort_at',
			'runs.created_at',
			'runs.place',
			'runs.conditions',
			'runs.intent',
			'runs.tyre_set',
			'runs.fuel_kg',
			'runs.timed_laps',
			'runs.clean_laps',
			'runs.best_lap_id',
			'runs.best_time_us',
			'runs.best_is_clean',
			'runs.theoretical_best_us',
			// By index: only the owner's runs of that day are counted.
			db.raw(`(SELECT COUNT(*) FROM runs AS same_day WHERE same_day.owner_id = runs.owner_id AND same_day.deleted_at IS NULL
				AND same_day.sort_at >= DATE(runs.sort_at) AND (same_day.sort_at < runs.sort_at
					OR (same_day.sort_at = runs.sort_at AND same_day.id <= runs.id))) AS run_of_day`)
		);
}

/** Runs a query made by `seenRunRows`. */
export async function listFoundRuns(query: Knex.QueryBuilder): Promise<FoundRun[]> {
	const rows: unknown = await query;
	return z.array(runRowSchema).parse(rows);
}

export function toRunListItem(row: FoundRun, layout: LayoutHead, viewer: Viewer): RunListItem {
	const { id, name, circuit, lengthM, cornerCount, mayEdit } = layout;
	return {
		id: encodePublicId(row.run_public_id),
		driver: { id: encodePublicId(row.driver_public_id), name: row.driver_name },
		own: row.owner_id === viewer.personId,
		layout: { id, name, circuit, lengthM, cornerCount, mayEdit },
		car:
			row.car_public_id && row.car_name !== null ? { id: encodePublicId(row.car_public_id), name: row.car_name } : null,
		place: row.place,
		conditions: row.conditions,
		startedAt: row.started_at?.toISOString() ?? null,
		uploadedAt: row.created_at.toISOString(),
		runOfDay: row.run_of_day,
		timedLaps: row.timed_laps,
		cleanLaps: row.clean_laps,
		bestLap:
			row.best_lap_public_id && row.best_time_us !== null
				? {
						id: encodePublicId(row.best_lap_public_id),
						timeS: row.best_time_us / US_PER_S,
						clean: row.best_is_clean === 1
					}
				: null,
		theoreticalBestS: row.theoretical_best_us === null ? null : row.theoretical_best_us / US_PER_S
	};
}
