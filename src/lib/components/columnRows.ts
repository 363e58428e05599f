import { capitalise } from '../format/count.ts';
import { formatNumber } from '../format/number.ts';
import { MINUS, NO_BREAK_SPACE } from '../format/signs.ts';
import { formatUnit } from '../format/unit.ts';
import type { SourceColumn } from '../schemas/analysisDocument.ts';
import type { Channel } from '../schemas/channels.ts';
import { CHANNEL_ORDER, CHANNEL_TEXT } from '../texts/channels.ts';
import { unitAfterReading, unitText } from '../texts/columnUnit.ts';

export interface ColumnRow {
	/** null for absent things that are wider than one channel */
	channel: Channel | null;
	/** 0-based place in the file; null where the file has no such column */
	index: number | null;
	/** what the product needs it for */
	need: string;
	/** header in the file; null where the file has no such column */
	header: string | null;
	/** as in the file, and what it became */
	unit: string;
	samples: string[];
	range: string;
	/** said only where the recognition is not plain */
	doubt: string | null;
	/** what is used where there is no column */
	instead: string | null;
}

/** From here on a recognition is a guess worth looking at; below the second, one that must be looked at. */
const SURE = 0.8;
const FAIRLY_SURE = 0.5;

/** How sure a recognition is, in words; null where it is plain. */
function doubtOf(confidence: number) {
	if (confidence >= SURE) return null;
	return confidence >= FAIRLY_SURE ? 'fairly sure' : 'a guess, please check';
}

/** A value as it stands in the file, with a proper minus. */
export function sampleText(sample: string) {
	return sample.replace(/^-/, MINUS);
}

/** From lowest to highest, in the unit after reading; of a column that is not used, as it stands. */
export function rangeOf(channel: Channel | null, { min, max, unit }: SourceColumn) {
	if (min === null || max === null) return '';
	const largest = Math.max(Math.abs(min), Math.abs(max));
	const whole = Number.isInteger(min) && Number.isInteger(max);
	const decimals = whole || largest >= 100 ? 0 : largest >= 10 ? 1 : 2;
	const after = channel === null ? '' : unitAfterReading(channel, unit);
	return `${formatNumber(min, { decimals })} to${NO_BREAK_SPACE}${formatUnit(max, after, { decimals })}`;
}

/**
 * The rows of "what was understood": recognised columns in the order in which a person looks for them, then what the file has
 * no column for.
 */
export function columnRows(
	columns: readonly SourceColumn[],
	absent: readonly { channel: string; instead: string | null }[]
): ColumnRow[] {
	const found = CHANNEL_ORDER.flatMap((channel) =>
		columns
			.map((column, index) => ({ column, index }))
			.filter(({ column }) => column.channel === channel)
			.map(({ column, index }) => ({
				channel,
				index,
				need: CHANNEL_TEXT[channel],
				header: column.header,
				unit: unitText(channel, column.unit),
				samples: column.samples.map(sampleText),
				range: rangeOf(channel, column),
				doubt: doubtOf(column.confidence),
				instead: null
			}))
	);
	const missing = absent.map(({ channel, instead }) => ({
		channel: CHANNEL_ORDER.find((one) => one === channel) ?? null,
		index: null,
		need: absentName(channel),
		header: null,
		unit: '',
		samples: [],
		range: '',
		doubt: null,
		instead
	}));
	return [...found, ...missing];
}

/** Absent things may be wider than one channel ("positions"): those are called as they come. */
function absentName(channel: string) {
	const known = CHANNEL_ORDER.find((one) => one === channel);
	return known ? CHANNEL_TEXT[known] : capitalise(channel);
}
