import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { readUnit } from './columnUnits.ts';
import { readAngle } from './readAngle.ts';
import { readNumber } from './readNumber.ts';
import { readClock, readDate } from './readTime.ts';
import { recogniseColumn } from './recogniseColumns.ts';
import { MAX_COLUMNS } from './rowPlan.ts';
import { splitLine } from './splitLine.ts';

export type Delimiter = ',' | ';' | '\t' | '|';

/** Where the table stands in the text and how its cells are written. Lines are 1-based, as an editor counts them. */
export interface Table {
	delimiter: Delimiter;
	decimal: '.' | ',';
	headerLine: number;
	firstDataLine: number;
	headers: string[];
	/** as long as `headers`; empty where there is no row of units */
	units: string[];
	metadata: Record<string, string>;
	/** cells of the first rows, for samples and value checks */
	firstRows: string[][];
}

const DELIMITERS: readonly Delimiter[] = [',', ';', '\t', '|'];
/** Lines that are looked at: enough to see past a long preamble, few enough to take no time. */
const MAX_LINES = 400;
/** Lines that are read cell by cell for one question. */
const MAX_PROBES = 60;
/** Lines above the numbers among which the header is looked for. */
const MAX_HEADER_ROWS = 6;
const MAX_SAMPLE_ROWS = 100;
const MAX_METADATA = 60;

/**
 * Finds the table in a file's first lines: delimiter, decimal sign, header row, row of units, first row of data, and the lines
 * above as metadata. What decides is the body: the delimiter under which most rows have one width and mostly numbers.
 *
 * @param text decoded first part of the file
 * @param wholeFile false: the last line may be cut and is left out
 * @throws {KerbnoteError} `empty_file`, `no_data_rows`, `not_csv`, `no_header`, `too_many_columns`
 */
export function findTable(text: string, wholeFile: boolean): Table {
	const lines = text.split(/\r\n|\n|\r/, MAX_LINES + 1);
	if (lines.length > MAX_LINES || !wholeFile) lines.pop();
	if (!lines.some((line) => line.trim() !== '')) {
		throw new KerbnoteError(
			'empty_file',
			'the file holds no text',
			'Export the run again and check that the file has a size'
		);
	}
	let best: Body | null = null;
	for (const delimiter of DELIMITERS) {
		const body = findBody(lines, delimiter);
		if (body && (!best || body.score > best.score)) best = body;
	}
	if (!best) return refuse(lines);
	if (best.width > MAX_COLUMNS) {
		throw new KerbnoteError(
			'too_many_columns',
			`the table has ${best.width} columns, at most ${MAX_COLUMNS} can be read`,
			'Export only the channels of the run',
			{
				row: best.firstRow + 1
			}
		);
	}
	return describe(lines, best);
}

interface Body {
	delimiter: Delimiter;
	rows: string[][];
	/** index of the first data line */
	firstRow: number;
	width: number;
	score: number;
}

function findBody(lines: readonly string[], delimiter: Delimiter): Body | null {
	const rows = lines.map((line) => splitLine(line, delimiter));
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
			score: share * headerFits * (Math.min(width, 8) + 10 * names)
		};
	}
	return null;
}

/** At most MAX_PROBES of these, evenly spread. */
function spread<T>(items: readonly T[]): T[] {
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

function isValue(cell: string): boolean {
	if (!/\d/.test(cell)) return readNumber(cell, '.') !== undefined;
	if (cell.length > 60) return false;
	return (
		readNumber(cell, '.') !== undefined ||
		readNumber(cell, ',') !== undefined ||
		readClock(cell) !== undefined ||
		readDate(cell) !== undefined ||
		(/[°'NSEWO]/i.test(cell) && readAngle(cell) !== undefined)
	);
}

function describe(lines: readonly string[], body: Body): Table {
	const { rows, firstRow, width, delimiter } = body;
	const above = [];
	for (let i = firstRow - 1; i >= 0 && above.length < MAX_HEADER_ROWS; i--) if (lines[i].trim() !== '') above.push(i);
	let header = -1;
	let recognised = -1;
	for (const i of above) {
		if (rows[i].length < Math.min(width - 1, Math.max(2, 0.6 * width))) continue;
		const count = rows[i].filter((cell) => recogniseColumn(cell).channel !== null).length;
		const isUnits = isUnitRow(rows[i]);
		if (count > recognised && !(isUnits && count === 0 && above.length > 1)) [header, recognised] = [i, count];
	}
	if (header < 0) {
		throw new KerbnoteError(
			'no_header',
			'the table has no row of column names above its numbers',
			'Export the file with a header row, or add one as the first line',
			{
				row: firstRow + 1
			}
		);
	}
	// Below the names as a rule, above them now and then.
	const unitRow = above.filter((i) => i !== header).find((i) => isUnitRow(rows[i]));
	const headers = rows[header].map(clean);
	const units = unitRow === undefined ? [] : headers.map((_, column) => clean(rows[unitRow][column] ?? ''));
	const data = rows.slice(firstRow).filter((row, i) => lines[firstRow + i].trim() !== '' && row.length > 1);
	return {
		delimiter,
		decimal: decimalSign(spread(data), delimiter),
		headerLine: header + 1,
		firstDataLine: firstRow + 1,
		headers,
		units,
		metadata: readMetadata(lines.slice(0, header), rows.slice(0, header)),
		firstRows: data.slice(0, MAX_SAMPLE_ROWS)
	};
}

function isUnitRow(cells: readonly string[]): boolean {
	const filled = cells.filter((cell) => cell.trim() !== '');
	return filled.length > 1 && filled.filter((cell) => readUnit(clean(cell)).length > 0).length >= 0.6 * filled.length;
}

function clean(cell: string): string {
	return cell
		.replaceAll('\0', '')
		.replace(/^\ufeff/, '')
		.trim();
}

/** Comma or point: what stands before fewer or more than three digits decides, then which of two stands last. */
function decimalSign(rows: readonly string[][], delimiter: Delimiter): '.' | ',' {
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
			parts.length > 1 ? [parts[0].replace(/^[#;/*\s]+|[:=\s]+$/g, ''), parts.slice(1).join(' ')] : pairOf(lines[i]);
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

function pairOf(line: string): [string, string] | null {
	const match = /^[#;/*\s]*([^:=]{1,80})[:=]\s*(.+)$/.exec(clean(line));
	return match ? [match[1].trim(), match[2].trim()] : null;
}

function refuse(lines: readonly string[]): never {
	for (const delimiter of DELIMITERS) {
		for (let i = 0; i < lines.length; i++) {
			const cells = splitLine(lines[i], delimiter);
			if (cells.length > MAX_COLUMNS) {
				throw new KerbnoteError(
					'too_many_columns',
					`line ${i + 1} has more than ${MAX_COLUMNS} columns`,
					'Export only the channels of the run',
					{ row: i + 1 }
				);
			}
			if (cells.length < 2 || cells.filter((cell) => recogniseColumn(clean(cell)).channel !== null).length < 2)
				continue;
			throw new KerbnoteError(
				'no_data_rows',
				`the table has a header in row ${i + 1} but no rows of numbers below it`,
				'Export the run again and check that the recording holds laps',
				{
					row: i + 1
				}
			);
		}
	}
	throw new KerbnoteError(
		'not_csv',
		'the file is text, but no table of numbers was found in it',
		'Export the run as CSV with a header row and upload that file',
		{ row: 1 }
	);
}
