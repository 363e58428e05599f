import type { Channel } from '../schemas/channels.ts';
import type { Table } from './findTable.ts';
import { readNumber } from './readNumber.ts';
import { readClock, readDate } from './readTime.ts';

/** Rows with a value that a column must have before anything is said of it. */
const LEAST_VALUES = 5;
const MAX_LAP = 500;

/**
 * What the columns of a table without names look like by their first rows: time runs on evenly, distance runs on as speed says, laps are
 * small whole numbers, pedals lie between 0 and 100. A suggestion for the person who answers, never more.
 *
 * @returns by column; null where nothing fits
 */
export function suggestChannels(table: Table): (Channel | null)[] {
	const columns = table.headers.map((_, column) =>
		table.firstRows.map((row) => readValue(row[column] ?? '', table.decimal)).filter(Number.isFinite)
	);
	const suggested: (Channel | null)[] = columns.map(() => null);
	const claim = (channel: Channel, fits: (values: readonly number[]) => boolean): number => {
		const found = columns.findIndex(
			(values, i) => suggested[i] === null && values.length >= LEAST_VALUES && fits(values)
		);
		if (found >= 0) suggested[found] = channel;
		return found;
	};
	const time = claim('time', runsEvenly);
	if (time < 0) return suggested;
	claim(
		'lap',
		(values) =>
			values.every(
				(value, i) => Number.isInteger(value) && value >= 0 && value < MAX_LAP && (i === 0 || value >= values[i - 1])
			) && new Set(values).size <= 4
	);
	const distance = claim(
		'distance',
		(values) =>
			values.every((value, i) => value >= 0 && (i === 0 || value >= values[i - 1])) &&
			values[values.length - 1] > values[0]
	);
	const rate = distance < 0 ? null : median(steps(columns[distance])) / median(steps(columns[time]));
	claim('speed', (values) => {
		const [middle, least] = [median(values), Math.min(...values)];
		if (least < 0 || middle <= 0) return false;
		if (rate === null) return Math.max(...values) > 5;
		return [1, 3.6, 2.236936].some((perMps) => Math.abs(Math.log(middle / (rate * perMps))) < 0.15);
	});
	claim('throttle', (values) => values.every((value) => value >= 0 && value <= 101) && median(values) > 0);
	claim('brake', (values) => values.every((value) => value >= 0 && value <= 250));
	claim('steering', (values) => values.some((value) => value < 0) && values.every((value) => Math.abs(value) < 1100));
	return suggested;
}

function readValue(cell: string, decimal: '.' | ','): number {
	return readNumber(cell, decimal) ?? readDate(cell)?.epochS ?? readClock(cell) ?? NaN;
}

/** Every step goes forward, and most by about the same. */
function runsEvenly(values: readonly number[]): boolean {
	const all = steps(values);
	const usual = median(all);
	return (
		all.every((step) => step > 0) &&
		all.filter((step) => Math.abs(step - usual) <= 0.25 * usual).length >= 0.8 * all.length
	);
}

function steps(values: readonly number[]): number[] {
	return values.slice(1).map((value, i) => value - values[i]);
}

function median(values: readonly number[]): number {
	return [...values].sort((a, b) => a - b)[values.length >> 1] ?? NaN;
}
