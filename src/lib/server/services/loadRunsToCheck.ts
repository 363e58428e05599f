import { z } from 'zod';
import { publicIdSchema, runListItemSchema } from '../../schemas/views.ts';
import { keptPeople, seenOwners } from '../access/seenRuns.ts';
import { seenLayouts } from '../access/seenLayouts.ts';
import type { Viewer } from '../access/viewer.ts';
import { database } from '../db/database.ts';
import { listLayoutHeads } from '../db/layoutHeads.ts';
import { decodePublicId } from '../db/publicId.ts';
import { listFoundRuns, seenRunRows, toRunListItem } from '../db/runRepository.ts';

export const runsToCheckSchema = z.object({
	runs: z.array(
		runListItemSchema.extend({
			/** name of the file it came from */
			fileName: z.string().nullable()
		})
	),
	/** layouts that a run may be said to be on, by circuit and name */
	layouts: z.array(z.object({ id: publicIdSchema, name: z.string(), circuit: z.string(), lengthM: z.number() })),
	/** names of cars that the runs' owners have */
	cars: z.array(z.string())
});
export type RunsToCheck = z.infer<typeof runsToCheckSchema>;

const MOST_RUNS = 200;
const MOST_LAYOUTS = 500;

/**
 * Runs with what can be corrected in them: only runs that the viewer may change, in the order of driving.
 *
 * @param runIds public ids; those that are not the viewer's to change are left out
 */
export async function loadRunsToCheck(viewer: Viewer, runIds: readonly string[]): Promise<RunsToCheck> {
	const db = database();
	const ids = runIds.slice(0, MOST_RUNS).flatMap((id) => decodePublicId(id) ?? []);
	const kept = await keptPeople(db, viewer);
	const rows =
		ids.length === 0
			? []
			: await listFoundRuns(
					seenRunRows(db, viewer)
						.whereIn('runs.public_id', ids)
						.whereIn('runs.owner_id', kept)
						.orderBy(['runs.sort_at', 'runs.id'])
				);
	const layoutIds = await listLayoutIds(viewer);
	const [heads, cars, files] = await Promise.all([
		listLayoutHeads(db, viewer, [...layoutIds, ...rows.map(({ layout_id }) => layout_id)]),
		db('cars').whereIn('owner_id', kept).distinct('name').orderBy('name').select<{ name: string }[]>('name'),
		db('uploads')
			.whereIn(
				'id',
				rows.flatMap(({ upload_id }) => upload_id ?? [])
			)
			.select<{ id: number; file_name: string }[]>('id', 'file_name')
	]);
	const fileNames = new Map(files.map(({ id, file_name }) => [id, file_name]));
	return {
		runs: rows.flatMap((row) => {
			const layout = heads.get(row.layout_id);
			const fileName = row.upload_id === null ? null : (fileNames.get(row.upload_id) ?? null);
			return layout ? [{ ...toRunListItem(row, layout, viewer), fileName }] : [];
		}),
		layouts: [...heads.values()]
			.map(({ id, name, circuit, lengthM }) => ({ id, name, circuit: circuit.name, lengthM }))
			.sort((one, other) => one.circuit.localeCompare(other.circuit) || one.name.localeCompare(other.name)),
		cars: cars.map(({ name }) => name)
	};
}

async function listLayoutIds(viewer: Viewer): Promise<number[]> {
	const db = database();
	const owners = await seenOwners(db, viewer);
	const rows: { id: number }[] = await db('layouts')
		.join('circuits', 'circuits.id', 'layouts.circuit_id')
		.where(seenLayouts(db, viewer, owners))
		.limit(MOST_LAYOUTS)
		.select<{ id: number }[]>('layouts.id');
	return rows.map(({ id }) => id);
}
