import type { Knex } from 'knex';
import { z } from 'zod';
import type { LayoutHead } from '../../schemas/views.ts';
import { editedCircuits } from '../access/seenLayouts.ts';
import type { Viewer } from '../access/viewer.ts';
import { encodePublicId } from './publicId.ts';

const rowSchema = z.object({
	id: z.number(),
	public_id: z.instanceof(Buffer),
	name: z.string(),
	length_m: z.number(),
	circuit_public_id: z.instanceof(Buffer),
	circuit_name: z.string(),
	outline: z.array(z.tuple([z.number(), z.number()])),
	corner_count: z.number(),
	may_edit: z.number()
});

/**
 * Heads of layouts that the caller has been shown a run of (or may see by `seenLayouts`), keyed by the layout's key.
 */
export async function listLayoutHeads(
	db: Knex,
	viewer: Viewer,
	layoutIds: readonly number[]
): Promise<Map<number, LayoutHead>> {
	if (layoutIds.length === 0) return new Map();
	const found: unknown = await db('layouts')
		.join('circuits', 'circuits.id', 'layouts.circuit_id')
		.join('path_versions', (on) =>
			on.on('path_versions.layout_id', 'layouts.id').andOn('path_versions.version', 'layouts.path_version')
		)
		.whereIn('layouts.id', [...new Set(layoutIds)])
		.select(
			'layouts.id',
			'layouts.public_id',
			'layouts.name',
			'layouts.length_m',
			'path_versions.outline',
			{ circuit_public_id: 'circuits.public_id', circuit_name: 'circuits.name' },
			db.raw(
				`(SELECT COUNT(corner_places.number) FROM corner_maps JOIN corner_places ON corner_places.corner_map_id = corner_maps.id
					WHERE corner_maps.layout_id = layouts.id AND corner_maps.version = layouts.map_version) AS corner_count`
			),
			db.raw('? AS may_edit', [editedCircuits(db, viewer)])
		);
	return new Map(
		z
			.array(rowSchema)
			.parse(found)
			.map((row) => [
				row.id,
				{
					id: encodePublicId(row.public_id),
					name: row.name,
					circuit: { id: encodePublicId(row.circuit_public_id), name: row.circuit_name },
					lengthM: row.length_m,
					cornerCount: row.corner_count,
					outline: row.outline,
					mayEdit: row.may_edit === 1
				}
			])
	);
}
