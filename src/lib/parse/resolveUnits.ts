import type { BrakeUnit } from '../schemas/channels.ts';
import type { Warning } from '../schemas/analysisDocument.ts';
import type { Columns, Ranges } from './columns.ts';
import { convertInertial } from './convertInertial.ts';
import { convertPedals } from './convertPedals.ts';
import { convertPositions } from './convertPositions.ts';
import { convertSpeed } from './convertSpeed.ts';
import { convertWheels } from './convertWheels.ts';
import type { ColumnPlan } from './planColumns.ts';
import { UnitWork } from './unitWork.ts';

export interface ResolvedUnits {
	/** by channel: the unit in the file as understood */
	units: Map<string, string>;
	brakeUnit: BrakeUnit | null;
	wheelUnit: 'kmh' | 'radps' | null;
	warnings: Warning[];
}

/**
 * Finds the unit of every column (declared, else by its values and by what physics ties it to) and converts the columns in place
 * to the house's units.
 *
 * @param columns converted in place
 * @param ranges by channel; kept in step
 * @param seconds time of each row, increasing within a run
 * @param plans the plan of each channel's column
 */
export function resolveUnits(
	columns: Columns,
	ranges: Ranges,
	seconds: Float64Array,
	plans: ReadonlyMap<string, ColumnPlan>
): ResolvedUnits {
	const work = new UnitWork(columns, ranges, seconds, plans);
	convertPositions(work);
	convertSpeed(work);
	const brakeUnit = convertPedals(work);
	convertInertial(work);
	const wheelUnit = convertWheels(work);
	convertOthers(work);
	return { units: work.units, brakeUnit, wheelUnit, warnings: work.warnings };
}

function convertOthers(work: UnitWork): void {
	for (const channel of work.columns.keys()) {
		if (work.units.has(channel)) continue;
		const unit = work.declared(channel);
		if (channel === 'heading' && unit?.id === 'rad') work.use('heading', unit);
		else if (channel === 'engineSpeed' && unit?.id === 'rad/s') {
			work.use('engineSpeed', { ...unit, factor: REVOLUTIONS_PER_MINUTE });
		} else work.units.set(channel, DEFAULT_UNITS.get(channel) ?? unit?.id ?? '');
	}
}

/** 1/min for one rad/s. */
const REVOLUTIONS_PER_MINUTE = 60 / (2 * Math.PI);

/** Units of channels that come in hardly any other. */
const DEFAULT_UNITS: ReadonlyMap<string, string> = new Map([
	['heading', 'deg'],
	['engineSpeed', '1/min']
]);
