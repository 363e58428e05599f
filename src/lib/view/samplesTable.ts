import { formatSignedSeconds } from '../format/delta.ts';
import { formatNumber } from '../format/number.ts';
import { speedIn, SPEED_UNIT_TEXT, type SpeedUnit } from '../format/speed.ts';
import type { ComparisonView } from '../schemas/views.ts';
import { deltaAt, gridValue, type GridColumn } from './gridValue.ts';
import type { CornerWindow } from './cornerWindow.ts';
import { rulerTicks } from './rulerView.ts';

/** The charts as numbers: one row every 10 m of a corner, for both laps. */
export interface SamplesTable {
	/** m between rows */
	everyM: number;
	/** channel names with units, in order; Δ is always last */
	columns: { key: string; name: string }[];
	rows: { place: string; cells: { driver: string; reference: string }[]; delta: string }[];
}

/** Reads both grids at the ruler's longer ticks, every 10 m in a corner; channels that neither lap has are left out. */
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
	const shown = ticks.filter((tick) => tick.size > 1);
	for (const { atM: placeM, onLapM } of shown) {
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
	const [first, second] = shown;
	return { everyM: second ? second.onLapM - first.onLapM : 0, columns, rows };
}
