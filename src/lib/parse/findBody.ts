import { MAX_HEADER_ROWS } from './describeTable.ts';
import { readAngle } from './readAngle.ts';
import { readNumber } from './readNumber.ts';
import { readClock, readDate } from './readTime.ts';
import { recogniseColumn } from './recogniseColumns.ts';
import { splitLine } from './splitLine.ts';
import { splitSpaced } from './splitSpaced.ts';

/** A space stands for runs of spaces. */
export type Delimiter = ',' | ';' | '\t' | '|' | ' ';

/** The rows of numbers as one delimiter shows them. */
export interface Body {
	delimiter: Delimiter;
	rows: string[][];
	/** index of the first data line */
	firstRow: number;
	width: number;
	/** names above it that are understood */
	names: number;
	score: number;
}

/** Lines that are read cell by cell for one question. */
const MAX_PROBES = 60;

/** The lines as rows of a table under a delimiter; null where they are none. */
export function findBody(lines: readonly string[], delimiter: Delimiter): Body | null {
	const rows = lines.map((line) => (delimiter === ' ' ? splitSpaced(line) : splitLine(line, delimiter)));
	const filled = rows.flatMap((row, i) => (lines[i].trim() === '' ? [] : [i]));
	const widths = new Map<number, number>();
	for (const i of spread(filled)) {
		if (rows[i].length > 1 && isDataRow(rows[i])) widths.set(rows[i].length, (widths.get(rows[i].length) ?? 0) + 1);
	}
	let width = 0;
	let most = 0;
	for (const [candidate, count] of widths) {
		if (count > most || (count === most && candidate > width)) [width, most] = [candidate, count];
	}
	if (width < 2) return null;
	const fits = (i: number) => rows[i].length >= Math.min(width, Math.max(2, 0.6 * width)) && isDataRow(rows[i]);
	for (let at = 0; at < filled.length; at++) {
		const following = filled.slice(at, at + 4);
		if (!following.every(fits)) continue;
		const body = spread(filled.slice(at));
		const share = body.filter(fits).length / body.length;
		// Names that are understood outweigh everything: a wrong delimiter leaves none.
		const above = filled.slice(Math.max(0, at - MAX_HEADER_ROWS), at);
		const names = Math.max(
			0,
			...above.map((i) => rows[i].filter((cell) => recogniseColumn(cell).channel !== null).length)
		);
		const headerFits = above.some((i) => Math.abs(rows[i].length - width) <= 1) ? 1 : 0.5;
		return {
			delimiter,
			rows,
			firstRow: filled[at],
			width,
			names,
			score: share * headerFits * (Math.min(width, 8) + 10 * names)
		};
	}
	return null;
}

/** At most MAX_PROBES of these, evenly spread. */
export function spread<T>(items: readonly T[]): T[] {
	const stride = Math.ceil(items.length / MAX_PROBES);
	return items.filter((_, i) => i % stride === 0);
}

/** At least half of the filled cells are numbers, times or positions. */
function isDataRow(cells: readonly string[]): boolean {
	let filled = 0;
	let numbers = 0;
	for (const cell of cells) {
		if (cell.trim() === '') continue;
		filled++;
		if (isValue(cell)) numbers++;
	}
	return numbers > 0 && numbers * 2 >= filled;
}

/** Longer text is no value, whatever it begins with. */
const MAX_VALUE = 60;

function isValue(cell: string): boolean {
	if (cell.length > MAX_VALUE) return false;
	if (!/\d/.test(cell)) return readNumber(cell, '.') !== undefined;
	return (
		readNumber(cell, '.') !== undefined ||
		readNumber(cell, ',') !== undefined ||
		readClock(cell) !== undefined ||
		readDate(cell) !== undefined ||
		(/[°'NSEWO]/i.test(cell) && readAngle(cell) !== undefined)
	);
}
