import type { Knex } from 'knex';
import { z } from 'zod';
import { cellSchema, type Cell } from '../../schemas/analysisDocument.ts';
import { mapCornerSchema, type CornerMapView, type MapCorner } from '../../schemas/cornerMap.ts';
import { decodePublicId, encodePublicId } from './publicId.ts';

const COLUMNS = {
	number: 'number',
	startM: 'start_m',
	apexM: 'apex_m',
	apex2M: 'apex2_m',
	endM: 'end_m',
	direction: 'direction',
	minRadiusM: 'min_radius_m',
	angleDeg: 'angle_deg',
	linkedTo: 'linked_to',
	kind: 'kind'
} as const satisfies Record<keyof Omit<MapCorner, 'id' | 'name'>, string>;

/** A version of a layout's corner map with kinks and the ids of all. */
export interface StoredMap {
	pathVersion: number;
	corners: MapCorner[];
	/** keys of the corners by their id */
	keys: Map<string, number>;
	cells: Cell[];
}

const mapRowSchema = z.object({ id: z.number(), path_version: z.number(), cells: z.array(cellSchema) });
const cornerRowSchema = mapCornerSchema
	.omit({ id: true })
	.extend({ corner_id: z.number(), public_id: z.instanceof(Buffer) });

/** @returns undefined when there is no such version */
export async function findMap(db: Knex, layoutId: number, version: number): Promise<StoredMap | undefined> {
	const found: unknown = await db('corner_maps')
		.where({ layout_id: layoutId, version })
		.first('id', 'path_version', 'cells');
	if (!found) return undefined;
	const map = mapRowSchema.parse(found);
	const places = Object.entries(COLUMNS).map(([field, column]) => `corner_places.${column} as ${field}`);
	const rows: unknown = await db('corner_places')
		.join('corners', 'corners.id', 'corner_places.corner_id')
		.where({ corner_map_id: map.id })
		.orderBy('corner_places.apex_m')
		.select('corner_places.corner_id', 'corners.public_id', 'corners.name', ...places);
	const keys = new Map<string, number>();
	const corners = z
		.array(cornerRowSchema)
		.parse(rows)
		.map(({ corner_id, public_id, ...corner }) => {
			const id = encodePublicId(public_id);
			keys.set(id, corner_id);
			return { id, ...corner };
		});
	return { pathVersion: map.path_version, corners, keys, cells: map.cells };
}

/**
 * Stores a further version. Corners that are new get their key here; those that were there before, in any version, keep theirs.
 *
 * @param keys of the corners that are known, by id
 */
export async function insertMap(
	trx: Knex.Transaction,
	map: Pick<StoredMap, 'pathVersion' | 'corners' | 'cells' | 'keys'> & {
		layoutId: number;
		version: number;
		createdBy: number;
	}
): Promise<void> {
	const { layoutId, version, pathVersion, corners, cells, keys, createdBy } = map;
	const [mapId]: number[] = await trx('corner_maps').insert({
		layout_id: layoutId,
		version,
		path_version: pathVersion,
		cells: JSON.stringify(cells),
		created_by: createdBy
	});
	for (const corner of corners) {
		const cornerId = keys.get(corner.id) ?? (await insertCorner(trx, layoutId, corner.id));
		const places = Object.entries(COLUMNS).map(([field, column]) => [column, corner[keyOf(field)]]);
		await trx('corner_places').insert({ corner_map_id: mapId, corner_id: cornerId, ...Object.fromEntries(places) });
	}
}

const placeFieldSchema = z.enum(Object.keys(COLUMNS) as [keyof typeof COLUMNS, ...(keyof typeof COLUMNS)[]]);
const keyOf = (field: string): keyof typeof COLUMNS => placeFieldSchema.parse(field);

async function insertCorner(trx: Knex.Transaction, layoutId: number, id: string): Promise<number> {
	const [cornerId]: number[] = await trx('corners').insert({ public_id: decodePublicId(id), layout_id: layoutId });
	return cornerId;
}

const versionRowSchema = z.object({ version: z.number(), created_at: z.date(), name: z.string().nullable() });
/** Older versions stay stored; so many are listed. */
const MOST_VERSIONS = 50;

/** Versions of a layout's map, newest first. */
export async function listMapVersions(db: Knex, layoutId: number): Promise<CornerMapView['versions']> {
	const rows: unknown = await db('corner_maps')
		.leftJoin('people', 'people.id', 'corner_maps.created_by')
		.where({ layout_id: layoutId })
		.orderBy('version', 'desc')
		.limit(MOST_VERSIONS)
		.select('corner_maps.version', 'corner_maps.created_at', 'people.name');
	return z
		.array(versionRowSchema)
		.parse(rows)
		.map(({ version, created_at, name }) => ({ version, createdAt: created_at.toISOString(), createdBy: name }));
}

const onsetSchema = z.object({
	public_id: z.instanceof(Buffer),
	onset_m: z.number().nullable(),
	lift_m: z.number().nullable()
});

/** Places where clean laps on the layout begin to slow for each corner, by the corner's id. */
export async function listOnsets(db: Knex, layoutId: number): Promise<Map<string, number[]>> {
	const rows: unknown = await db('corners')
		.join('lap_corner_metrics', 'lap_corner_metrics.corner_id', 'corners.id')
		.join('laps', 'laps.id', 'lap_corner_metrics.lap_id')
		.where({ 'corners.layout_id': layoutId, 'laps.is_clean': true })
		.select('corners.public_id', 'lap_corner_metrics.onset_m', 'lap_corner_metrics.lift_m');
	const onsets = new Map<string, number[]>();
	for (const { public_id, onset_m, lift_m } of z.array(onsetSchema).parse(rows)) {
		const places = [onset_m, lift_m].filter((place) => place !== null);
		if (places.length === 0) continue;
		const id = encodePublicId(public_id);
		const known = onsets.get(id) ?? [];
		known.push(Math.min(...places));
		onsets.set(id, known);
	}
	return onsets;
}
