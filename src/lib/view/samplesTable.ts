import { formatSignedSeconds } from '../format/delta.ts';
import { formatNumber } from '../format/number.ts';
import { speedIn, SPEED_UNIT_TEXT, type SpeedUnit } from '../format/speed.ts';
import type { ComparisonView } from '../schemas/views.ts';
import { deltaAt, gridValue, type GridColumn } from './gridValue.ts';
import type { CornerWindow } from './cornerWindow.ts';
import { rulerTicks } from './rulerView.ts';

/** The charts as numbers: one row every 10 m, for both laps. */
export interface SamplesTable {
	/** channel names with units, in order; Δ is always last */
	columns: { key: string; name: string }[];
	rows: { place: string; cells: { driver: string; reference: string }[]; delta: string }[];
}

/** Reads both grids every 10 m of the window; channels that neither lap has are left out. */
export function samplesTable(
	view: ComparisonView,
	window: CornerWindow,
	zeroM: number,
	speedUnit: SpeedUnit
): SamplesTable {
	const { driverGrid, referenceGrid, path } = view;
	const all: { key: GridColumn; name: string }[] = [
		{ key: 'brakePct', name: 'Brake, %' },
		{ key: 'speedKmh', name: `Speed, ${SPEED_UNIT_TEXT[speedUnit]}` },
		{ key: 'throttlePct', name: 'Throttle, %' },
		{ key: 'steeringDeg', name: 'Steering, ° left' }
	];
	const columns = all.filter(({ key }) => driverGrid[key] !== null || referenceGrid[key] !== null);
	const zero = deltaAt(driverGrid, referenceGrid, zeroM);
	const rows: SamplesTable['rows'] = [];
	const ticks = rulerTicks({ ...window, lengthM: path.lengthM, closed: path.closed });
	for (const { atM: placeM, onLapM } of ticks.filter((tick) => tick.size > 1)) {
		const say = (key: GridColumn, value: number): string =>
			formatNumber(key === 'speedKmh' ? speedIn(value, speedUnit) : value);
		rows.push({
			place: formatNumber(onLapM),
			cells: columns.map(({ key }) => ({
				driver: say(key, gridValue(driverGrid, key, placeM)),
				reference: say(key, gridValue(referenceGrid, key, placeM))
			})),
			delta: formatSignedSeconds(deltaAt(driverGrid, referenceGrid, placeM) - zero)
		});
	}
	return { columns, rows };
}
