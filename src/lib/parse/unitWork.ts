import type { Warning } from '../schemas/analysisDocument.ts';
import type { Channel } from '../schemas/channels.ts';
import type { Range } from './columnStore.ts';
import type { Unit } from './columnUnits.ts';
import type { Column, Columns, Ranges } from './columns.ts';
import type { ColumnPlan } from './planColumns.ts';

/** What the unit finders share: the columns that they convert, what is declared of them, and what they found. */
export class UnitWork {
	/** by channel: the unit in the file as understood */
	readonly units = new Map<string, string>();
	readonly warnings: Warning[] = [];

	constructor(
		readonly columns: Columns,
		readonly ranges: Ranges,
		readonly seconds: Float64Array,
		readonly plans: ReadonlyMap<string, ColumnPlan>
	) {}

	declared(channel: string): Unit | null {
		return this.plans.get(channel)?.unit ?? null;
	}

	range(channel: Channel): Range {
		return this.ranges.get(channel) ?? { min: NaN, max: NaN };
	}

	/** Multiplies a column, and its range with it. */
	scale(channel: Channel, column: Column, factor: number): void {
		for (let i = 0; i < column.length; i++) column[i] *= factor;
		const { min, max } = this.range(channel);
		this.ranges.set(channel, { min: min * factor, max: max * factor });
	}

	/** Notes the unit, converts the column, and says so where it was a guess. */
	use(channel: Channel, unit: Unit, assumed?: string): void {
		const column = this.columns.get(channel);
		if (!column) return;
		if (unit.factor !== 1) this.scale(channel, column, unit.factor);
		this.units.set(channel, unit.id);
		if (assumed) this.assume(channel, assumed);
	}

	/** Says that a column names no unit, and why one was taken. */
	assume(channel: string, because: string, code: Warning['code'] = 'unit_assumed'): void {
		const header = this.plans.get(channel)?.header ?? channel;
		this.warnings.push({ code, message: `column "${header}" names no unit, ${because}`, row: null });
	}
}
