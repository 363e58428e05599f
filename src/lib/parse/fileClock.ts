import type { Warning } from '../schemas/analysisDocument.ts';
import { SECONDS_PER_DAY } from './readTime.ts';
import type { Column } from './columns.ts';
import { quantile, typicalStep } from './columns.ts';
import type { ColumnPlan } from './planColumns.ts';
import { readDate } from './readTime.ts';

export interface FileClock {
	/** s on the clock of the file; from the first sample where that is an epoch */
	seconds: Float64Array;
	/** ms since 1970 UTC at seconds = 0, where the file says so */
	epochMs: number | null;
	/** how the time is written, for the list of columns */
	label: string;
	warning: Warning | null;
}

/** 2001-09-09 to 2096: what an epoch looks like in seconds. */
const EPOCH_FROM_S = 1e9;
const EPOCH_TO_S = 4e9;
const EPOCHS = [
	{ perSecond: 1, label: 'epoch s' },
	{ perSecond: 1e3, label: 'epoch ms' },
	{ perSecond: 1e6, label: 'epoch µs' },
	{ perSecond: 1e9, label: 'epoch ns' }
];
/** A recording slower than this (s between samples) holds no lap trace, so its unit must be a finer one. */
const SLOWEST_STEP_S = 4;
/** A recording faster than this is none either: a step as small means days or hours. */
const FASTEST_STEP_S = 5e-5;

/**
 * Turns a time column into seconds: declared unit, epoch by magnitude, else by the step between samples.
 */
export function readClockColumn(column: Column, plan: ColumnPlan): FileClock {
	const first = column.find((value) => Number.isFinite(value)) ?? 0;
	if (plan.timeForm === 'date') {
		const zoned = plan.samples.some((sample) => readDate(sample)?.zoned);
		return {
			seconds: scaled(column, first, 1),
			epochMs: zoned ? Math.round(first * 1000) : null,
			label: 'ISO 8601',
			warning: null
		};
	}
	if (plan.timeForm === 'clock')
		return { seconds: new Float64Array(column), epochMs: null, label: 'h:mm:ss.sss', warning: null };
	const middle = quantile(column, 0.5);
	for (const { perSecond, label } of EPOCHS) {
		if (middle / perSecond < EPOCH_FROM_S || middle / perSecond > EPOCH_TO_S) continue;
		// A declared finer unit over a plain count from switch-on could reach as far; an epoch in ms cannot be a count in ms.
		if (plan.unit && plan.unit.factor * perSecond !== 1 && plan.unit.id !== 's') continue;
		return {
			seconds: scaled(column, first, perSecond),
			epochMs: Math.round((first / perSecond) * 1000),
			label,
			warning: null
		};
	}
	const declared = plan.unit;
	if (declared?.dimension === 'time')
		return { seconds: scaled(column, 0, 1 / declared.factor), epochMs: null, label: declared.id, warning: null };
	const step = typicalStep(column);
	const guess =
		step >= SLOWEST_STEP_S * 1e6
			? { perSecond: 1e9, label: 'ns' }
			: step >= SLOWEST_STEP_S * 1e3
				? { perSecond: 1e6, label: 'us' }
				: step >= SLOWEST_STEP_S
					? { perSecond: 1e3, label: 'ms' }
					: step < FASTEST_STEP_S
						? { perSecond: 1 / SECONDS_PER_DAY, label: 'days' }
						: { perSecond: 1, label: 's' };
	const warning: Warning | null =
		guess.label === 's'
			? null
			: {
					code: 'unit_assumed',
					message: `column "${plan.header}" names no unit, its steps say ${guess.label}`,
					row: null
				};
	return {
		seconds: scaled(column, guess.label === 'days' ? first : 0, guess.perSecond),
		epochMs: null,
		label: guess.label,
		warning
	};
}

function scaled(column: Column, zero: number, perSecond: number): Float64Array {
	const seconds = new Float64Array(column.length);
	for (let i = 0; i < column.length; i++) seconds[i] = (column[i] - zero) / perSecond;
	return seconds;
}
