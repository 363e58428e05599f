import type { Knex } from 'knex';
import { z } from 'zod';
import type { ReferencePath } from '../../analysis/model.ts';
import { cellSchema, type Cell, type Corner } from '../../schemas/analysisDocument.ts';
import type { CornerView } from '../../schemas/views.ts';
import { decodePath, encodePath, outlineOf, PATH_CODEC } from './pathCodec.ts';
import { encodePublicId, newPublicId } from './publicId.ts';

/** Which path and which corner map something was measured on. */
export interface LayoutVersion {
	layoutId: number;
	pathVersion: number;
	mapVersion: number;
}

/** What nobody has named yet. */
export const UNNAMED_CIRCUIT = 'Unnamed circuit';
export const UNNAMED_LAYOUT = 'Full layout';

/**
 * A new circuit with one layout, first version of path and corner map, all in one transaction.
 *
 * @param createdBy whose file it came from
 */
export async function insertLayout(
	trx: Knex.Transaction,
	layout: { path: ReferencePath; corners: readonly Corner[]; cells: readonly Cell[]; createdBy: number }
): Promise<LayoutVersion> {
	const { path, corners, cells, createdBy } = layout;
	const [circuitId]: number[] = await trx('circuits').insert({
		public_id: newPublicId(),
		name: UNNAMED_CIRCUIT,
		created_by: createdBy
	});
	const onEarth = path.origin === 'positions' ? path.frame : null;
	const [layoutId]: number[] = await trx('layouts').insert({
		public_id: newPublicId(),
		circuit_id: circuitId,
		name: UNNAMED_LAYOUT,
		length_m: path.lengthM,
		is_closed: path.closed,
		centre_latitude_deg: onEarth?.latitudeDeg ?? null,
		centre_longitude_deg: onEarth?.longitudeDeg ?? null
	});
	await trx('path_versions').insert({
		layout_id: layoutId,
		version: 1,
		length_m: path.lengthM,
		is_closed: path.closed,
		origin: path.origin,
		line: path.line,
		frame_latitude_deg: path.frame?.latitudeDeg ?? null,
		frame_longitude_deg: path.frame?.longitudeDeg ?? null,
		outline: JSON.stringify(path.origin === 'speedOnly' ? [] : outlineOf(path)),
		codec: PATH_CODEC,
		payload: encodePath(path)
	});
	const [mapId]: number[] = await trx('corner_maps').insert({
		layout_id: layoutId,
		version: 1,
		path_version: 1,
		cells: JSON.stringify(cells),
		created_by: createdBy
	});
	for (const corner of corners) await insertCorner(trx, layoutId, mapId, corner);
	return { layoutId, pathVersion: 1, mapVersion: 1 };
}

async function insertCorner(trx: Knex.Transaction, layoutId: number, mapId: number, corner: Corner): Promise<void> {
	const [cornerId]: number[] = await trx('corners').insert({ public_id: newPublicId(), layout_id: layoutId });
	await trx('corner_places').insert({
		corner_map_id: mapId,
		corner_id: cornerId,
		number: corner.number,
		start_m: corner.startM,
		apex_m: corner.apexM,
		apex2_m: corner.apex2M,
		end_m: corner.endM,
		direction: corner.direction,
		min_radius_m: corner.minRadiusM,
		angle_deg: corner.angleDeg,
		linked_to: corner.linkedTo,
		kind: corner.kind
	});
}

const pathRowSchema = z.object({
	length_m: z.number(),
	is_closed: z.number(),
	origin: z.enum(['positions', 'latAcc', 'yawRate', 'steering', 'speedOnly']),
	line: z.enum(['mark', 'layout', 'chosen']),
	frame_latitude_deg: z.number().nullable(),
	frame_longitude_deg: z.number().nullable(),
	codec: z.number(),
	payload: z.instanceof(Buffer)
});

/** @throws {Error} when there is no such version: everything stored names one that exists */
export async function getPath(
	db: Knex,
	version: Pick<LayoutVersion, 'layoutId' | 'pathVersion'>
): Promise<ReferencePath> {
	const found: unknown = await db('path_versions')
		.where({ layout_id: version.layoutId, version: version.pathVersion })
		.first(Object.keys(pathRowSchema.shape));
	const row = pathRowSchema.parse(found);
	return {
		lengthM: row.length_m,
		closed: row.is_closed === 1,
		...decodePath(row.codec, row.payload),
		origin: row.origin,
		line: row.line,
		frame:
			row.frame_latitude_deg !== null && row.frame_longitude_deg !== null
				? { latitudeDeg: row.frame_latitude_deg, longitudeDeg: row.frame_longitude_deg }
				: null
	};
}

/** A corner with the key that rows of metrics carry. */
export interface StoredCorner {
	cornerId: number;
	corner: CornerView;
}

const cornerRowSchema = z.object({
	corner_id: z.number(),
	public_id: z.instanceof(Buffer),
	name: z.string().nullable(),
	number: z.number().nullable(),
	start_m: z.number(),
	apex_m: z.number(),
	apex2_m: z.number().nullable(),
	end_m: z.number(),
	direction: z.enum(['left', 'right']).nullable(),
	min_radius_m: z.number().nullable(),
	angle_deg: z.number().nullable(),
	linked_to: z.number().nullable(),
	kind: z.enum(['braked', 'lifted', 'flat']).nullable(),
	cells: z.array(cellSchema)
});

/** Corners of a map in the order of their apexes, and its cells. */
export async function getCornerMap(
	db: Knex,
	version: Pick<LayoutVersion, 'layoutId' | 'mapVersion'>
): Promise<{ corners: StoredCorner[]; cells: Cell[] }> {
	const found: unknown = await db('corner_maps')
		.leftJoin('corner_places', 'corner_places.corner_map_id', 'corner_maps.id')
		.leftJoin('corners', 'corners.id', 'corner_places.corner_id')
		.where({ 'corner_maps.layout_id': version.layoutId, 'corner_maps.version': version.mapVersion })
		.orderBy('corner_places.apex_m')
		.select('corner_places.*', 'corners.public_id', 'corners.name', 'corner_maps.cells');
	const rows = z
		.array(z.union([cornerRowSchema, z.object({ corner_id: z.null(), cells: z.array(cellSchema) })]))
		.parse(found);
	if (rows.length === 0)
		throw new Error(`getCornerMap requires a stored map, got layout ${version.layoutId} version ${version.mapVersion}`);
	return { corners: rows.flatMap((row) => (row.corner_id === null ? [] : [toCorner(row)])), cells: rows[0].cells };
}

function toCorner(row: z.infer<typeof cornerRowSchema>): StoredCorner {
	return {
		cornerId: row.corner_id,
		corner: {
			id: row.number === null ? null : encodePublicId(row.public_id),
			name: row.name,
			number: row.number,
			startM: row.start_m,
			apexM: row.apex_m,
			apex2M: row.apex2_m,
			endM: row.end_m,
			direction: row.direction,
			minRadiusM: row.min_radius_m,
			angleDeg: row.angle_deg,
			linkedTo: row.linked_to,
			kind: row.kind
		}
	};
}

/**
 * Removes a layout on which no run lies any more and which nobody has named: what an earlier reading of a file has left.
 */
export async function removeUnusedLayout(trx: Knex.Transaction, layoutId: number): Promise<void> {
	const used: unknown = await trx('runs').where({ layout_id: layoutId }).first('id');
	if (used) return;
	const layout = await trx('layouts')
		.join('circuits', 'circuits.id', 'layouts.circuit_id')
		.where({ 'layouts.id': layoutId, 'circuits.name': UNNAMED_CIRCUIT })
		.first<{ circuit_id: number } | undefined>('layouts.circuit_id');
	if (!layout) return;
	await trx('analyses').where({ layout_id: layoutId }).delete();
	await trx('layouts').where({ id: layoutId }).delete();
	const [{ left }] = await trx('layouts')
		.where({ circuit_id: layout.circuit_id })
		.count<{ left: number }[]>({ left: '*' });
	if (left === 0) await trx('circuits').where({ id: layout.circuit_id }).delete();
}
