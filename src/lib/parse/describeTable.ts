import { readUnit } from './columnUnits.ts';
import type { Body } from './findBody.ts';
import type { Table } from './findTable.ts';
import { recogniseColumn } from './recogniseColumns.ts';
import { spread } from './findBody.ts';

/** Lines above the numbers among which the header is looked for. */
export const MAX_HEADER_ROWS = 6;
const MAX_SAMPLE_ROWS = 100;
const MAX_METADATA = 60;

/** Header, row of units, decimal sign and metadata of a body that was found. */
export function describeTable(lines: readonly string[], body: Body): Table {
	const { rows, firstRow, delimiter } = body;
	const above: number[] = [];
	for (let i = firstRow - 1; i >= 0 && above.length < MAX_HEADER_ROWS; i--) if (lines[i].trim() !== '') above.push(i);
	const names = findNames(rows, above, body.width);
	const data = rows.slice(firstRow).filter((row, i) => lines[firstRow + i].trim() !== '' && row.length > 1);
	const headers = names?.headers ?? Array.from({ length: body.width }, (_, column) => `column ${column + 1}`);
	// Below the names as a rule, above them now and then.
	const unitRow = above.filter((i) => !names?.rows.includes(i)).find((i) => isUnitRow(rows[i]));
	const preambleRows = names ? Math.min(...names.rows) : firstRow;
	return {
		delimiter,
		decimal: decimalSign(spread(data), delimiter),
		headerLine: names ? Math.max(...names.rows) + 1 : null,
		firstDataLine: firstRow + 1,
		headers,
		units: unitRow === undefined ? [] : headers.map((_, column) => clean(rows[unitRow][column] ?? '')),
		metadata: readMetadata(lines.slice(0, preambleRows), rows.slice(0, preambleRows)),
		firstRows: data.slice(0, MAX_SAMPLE_ROWS)
	};
}

interface Names {
	headers: string[];
	/** indices of the lines that they stand in */
	rows: number[];
}

/** The row of names, or two rows that name the columns together; null where there is none. */
function findNames(rows: readonly string[][], above: readonly number[], width: number): Names | null {
	const wide = above.filter((i) => rows[i].length >= Math.min(width - 1, Math.max(2, 0.6 * width)));
	let best: (Names & { recognised: number }) | null = null;
	for (const i of wide) {
		const headers = rows[i].map(clean);
		const recognised = countRecognised(headers);
		if (recognised === 0 && above.length > 1 && isUnitRow(rows[i])) continue;
		if (!best || recognised > best.recognised) best = { headers, rows: [i], recognised };
	}
	for (const upper of above) {
		const lower = above[above.indexOf(upper) - 1];
		if (lower === undefined || !wide.includes(lower) || isUnitRow(rows[lower]) || isUnitRow(rows[upper])) continue;
		// A name may stand over several columns, once.
		for (const filled of [rows[upper], filledForward(rows[upper], rows[lower].length)]) {
			const headers = rows[lower].map((cell, column) => clean(`${clean(filled[column] ?? '')} ${clean(cell)}`));
			const recognised = countRecognised(headers);
			if (best && recognised > best.recognised) best = { headers, rows: [upper, lower], recognised };
		}
	}
	return best;
}

function countRecognised(headers: readonly string[]): number {
	return new Set(headers.map((cell) => recogniseColumn(cell).channel).filter((channel) => channel !== null)).size;
}

function filledForward(cells: readonly string[], width: number): string[] {
	let last = '';
	return Array.from({ length: width }, (_, column) => {
		const cell = clean(cells[column] ?? '');
		if (cell !== '') last = cell;
		return last;
	});
}

function isUnitRow(cells: readonly string[]): boolean {
	const filled = cells.filter((cell) => cell.trim() !== '');
	return filled.length > 1 && filled.filter((cell) => readUnit(clean(cell)).length > 0).length >= 0.6 * filled.length;
}

/** A cell without what only marks it: nulls, a byte order mark, the sign of a comment. */
export function clean(cell: string): string {
	return cell
		.replaceAll('\0', '')
		.replace(/^\ufeff/, '')
		.trim();
}

/** Comma or point: what stands before fewer or more than three digits decides, then which of two stands last. */
function decimalSign(rows: readonly string[][], delimiter: string): '.' | ',' {
	let comma = 0;
	let point = 0;
	for (const row of rows) {
		for (const cell of row) {
			const text = cell.trim();
			if (!/^[+\-\u2212]?[\d.,\s'’]+(?:e[+-]?\d+)?$/i.test(text)) continue;
			const [lastComma, lastPoint] = [text.lastIndexOf(','), text.lastIndexOf('.')];
			// Groups of three may be thousands: such a cell is a hint, no more.
			const weight = /^[+-]?[1-9]\d{0,2}(?:[.,]\d{3})+$/.test(text) ? 0.1 : 1;
			if (lastComma > lastPoint) comma += weight;
			else if (lastPoint >= 0) point += weight;
		}
	}
	// Where commas separate cells, a lone "1,234" in quotes is a grouped thousand.
	if (delimiter === ',' && comma < 1) return '.';
	return comma > point ? ',' : '.';
}

function readMetadata(lines: readonly string[], rows: readonly string[][]): Record<string, string> {
	const metadata: Record<string, string> = {};
	let count = 0;
	rows.forEach((cells, i) => {
		if (count >= MAX_METADATA) return;
		const parts = cells.map(clean).filter((cell) => cell !== '');
		const pair =
			parts.length > 1
				? [parts[0].slice(0, MAX_PAIR).replace(/^[#;/*\s]+|[:=\s]+$/g, ''), parts.slice(1).join(' ')]
				: pairOf(lines[i]);
		if (!pair || pair[0] === '' || pair[1] === '') return;
		Object.defineProperty(metadata, pair[0].slice(0, 80).toLowerCase(), {
			value: pair[1].slice(0, 300),
			enumerable: true,
			configurable: true,
			writable: true
		});
		count++;
	});
	return metadata;
}

/** Longest line that is taken for a line of a preamble. */
const MAX_PAIR = 1000;

function pairOf(line: string): [string, string] | null {
	const match = /^([^:=]{1,80})[:=](.+)$/.exec(clean(line.slice(0, MAX_PAIR)).replace(/^[#;/*\s]+/, ''));
	return match ? [match[1].trim(), match[2].trim()] : null;
}
