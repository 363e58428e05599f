import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import type { Columns } from './columns.ts';
import { rangeOf } from './columns.ts';

/** Slower than walking, and within a receiver's own noise: nothing that could be a lap. */
const STILL_KMH = 5;
const STILL_M = 30;
const METRES_PER_DEGREE = 111_195;

/**
 * Refuses a recording in which the car never moves: no speed, no way, no change of place. A single channel that moves is enough.
 *
 * @param columns in house units
 * @throws {KerbnoteError} `no_movement`
 */
export function refuseStill(columns: Columns, place: { row: number; column: string | null }): void {
	const speed = columns.get('speed');
	if (speed) {
		const { min, max } = rangeOf(speed);
		if (max >= STILL_KMH || min <= -STILL_KMH) return;
	}
	for (const channel of ['distance', 'lapDistance', 'positionX', 'positionY'] as const) {
		if (spanOf(columns, channel) >= STILL_M) return;
	}
	for (const channel of ['latitude', 'longitude'] as const) {
		if (spanOf(columns, channel) * METRES_PER_DEGREE >= STILL_M) return;
	}
	throw new KerbnoteError(
		'no_movement',
		'time runs, but the car never moves: speed, distance and position stand still',
		'Export a run that was driven, and check that the sensors were on',
		place
	);
}

function spanOf(
	columns: Columns,
	channel: 'distance' | 'lapDistance' | 'positionX' | 'positionY' | 'latitude' | 'longitude'
): number {
	const column = columns.get(channel);
	if (!column) return 0;
	const { min, max } = rangeOf(column);
	return Number.isNaN(min) ? 0 : max - min;
}
