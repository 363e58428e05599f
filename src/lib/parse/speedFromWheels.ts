import type { Warning } from '../schemas/analysisDocument.ts';
import type { Channel } from '../schemas/channels.ts';
import { readHeaderWords } from './columnWords.ts';
import type { Columns } from './columns.ts';
import { WHEEL_CHANNELS } from './convertWheels.ts';
import { readHeaderText } from './headerText.ts';
import { missingColumn } from './missingColumn.ts';
import type { ColumnPlan } from './planColumns.ts';
import type { ResolvedUnits } from './resolveUnits.ts';

/** Channels that say how the car moves, one of which a run must have. */
export const MOTION_CHANNELS: readonly Channel[] = ['speed', 'distance', 'lapDistance', 'latitude', 'positionX'];

/** Without any speed the wheels' own stands in: the middle of them, which a single locked or spinning one does not move. */
export function speedFromWheels(
	columns: Columns,
	plans: ReadonlyMap<string, ColumnPlan>,
	resolved: ResolvedUnits,
	headerRow: number | null
): Warning[] {
	const named = plans.get('speed')?.header;
	if (named && readHeaderWords(readHeaderText(named).words).parts.some((part) => part.has('wheel'))) {
		return [
			{
				code: 'speed_from_wheel',
				message: `speed is a wheel's ("${named}"): it is wrong where the wheel slips`,
				row: null
			}
		];
	}
	const wheels = WHEEL_CHANNELS.flatMap((channel) => columns.get(channel) ?? []);
	if (MOTION_CHANNELS.some((channel) => columns.has(channel)) || wheels.length === 0) return [];
	if (resolved.wheelUnit !== 'kmh')
		throw missingColumn('missing_speed', 'speed, distance or position', [...plans.values()], headerRow);
	const speed = new Float32Array(wheels[0].length);
	const values = new Float64Array(wheels.length);
	for (let i = 0; i < speed.length; i++) {
		for (let wheel = 0; wheel < wheels.length; wheel++) values[wheel] = wheels[wheel][i];
		values.sort();
		speed[i] = (values[(values.length - 1) >> 1] + values[values.length >> 1]) / 2;
	}
	columns.set('speed', speed);
	return [
		{
			code: 'speed_from_wheel',
			message: 'the file has no speed; the middle of the wheel speeds stands in, which is wrong where they slip',
			row: null
		}
	];
}
