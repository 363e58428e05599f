import type { Knex } from 'knex';
import { centreLine } from '../src/lib/demo/centreLine.ts';
import type { DemoCircuit } from '../src/lib/demo/circuits.ts';

/** A corner is the one that the demo calls so when the middle of its arc lies in it, or this near to its apex. */
const SAME_CORNER_M = 30;

/**
 * Gives the circuit, the layout and the corners that an import has found the names of the demo. Layouts of one circuit come under one.
 *
 * @param layoutId layout that a run of the demo was laid on
 */
export async function nameLayout(db: Knex, layoutId: number, demo: DemoCircuit): Promise<void> {
	const layout = await db('layouts')
		.where({ id: layoutId })
		.first<{ circuit_id: number; length_m: number; map_version: number }>('circuit_id', 'length_m', 'map_version');
	const named = await db('circuits').where({ name: demo.circuit }).first<{ id: number } | undefined>('id');
	if (named && named.id !== layout.circuit_id) {
		await db('layouts').where({ id: layoutId }).update({ circuit_id: named.id });
		await db('circuits').where({ id: layout.circuit_id }).delete();
	} else await db('circuits').where({ id: layout.circuit_id }).update({ name: demo.circuit });
	await db('layouts').where({ id: layoutId }).update({ name: demo.layout });

	const places = await db('corner_places')
		.join('corner_maps', 'corner_maps.id', 'corner_places.corner_map_id')
		.where({ 'corner_maps.layout_id': layoutId, 'corner_maps.version': layout.map_version })
		.whereNotNull('corner_places.number')
		.select<{ corner_id: number; apex_m: number; start_m: number; end_m: number }[]>(
			'corner_places.corner_id',
			'corner_places.apex_m',
			'corner_places.start_m',
			'corner_places.end_m'
		);
	const road = centreLine(demo);
	const scale = layout.length_m / road.lengthM;
	for (const { name, apexM } of road.corners) {
		const middleM = apexM * scale;
		const away = ({ apex_m, start_m, end_m }: (typeof places)[number]): number =>
			start_m <= middleM && middleM <= end_m ? 0 : Math.abs(apex_m - middleM);
		const [nearest] = [...places].sort((a, b) => away(a) - away(b));
		if (nearest && away(nearest) < SAME_CORNER_M) await db('corners').where({ id: nearest.corner_id }).update({ name });
	}
}
