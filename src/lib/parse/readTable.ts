import Papa from 'papaparse';
import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { decoderLabel, detectEncoding } from './encoding.ts';
import { readHeaderText, type HeaderText } from './headerText.ts';
import { refuseForeignBytes, refuseForeignText } from './refuseForeign.ts';

/** A small table as text: what a list of laps or a pedal sweep is, before anybody knows what its columns mean. */
export interface TextTable {
	/** one per column; empty where the file names none */
	headers: readonly TableHeader[];
	/** rows below the header, each as wide as the header */
	rows: readonly TableRow[];
	/** decimal sign of the file */
	decimal: '.' | ',';
}

export interface TableHeader extends HeaderText {
	text: string;
}

export interface TableRow {
	/** 1-based line of the file, as long as no cell holds a line end */
	line: number;
	cells: readonly string[];
}

const DELIMITERS = [',', ';', '\t', '|'];
/** Lines above the numbers among which the header is looked for. */
const MAX_HEADER_LINE = 60;
const MAX_ROWS = 2_000_000;

/**
 * Reads a table of a few columns: encoding, delimiter and header row are found, cells stay text.
 *
 * @param isHeader says of a row whether it names the columns that are needed
 * @throws {KerbnoteError} `empty_file`, `no_header`, `no_data_rows`, and what is no text
 */
export function readTable(bytes: Uint8Array, isHeader: (headers: readonly TableHeader[]) => boolean): TextTable {
	if (bytes.length === 0) throw emptyFile();
	const { encoding, markBytes } = detectEncoding(bytes.subarray(0, 1 << 16));
	if (!encoding.startsWith('utf-16')) refuseForeignBytes(bytes.subarray(0, 1 << 16), true);
	const text = new TextDecoder(decoderLabel(encoding)).decode(bytes.subarray(markBytes)).replaceAll('\0', '');
	if (text.trim() === '') throw emptyFile();
	refuseForeignText(text.slice(0, 1 << 16));
	const head = text.split(/\r\n|\n|\r/, MAX_HEADER_LINE);
	const found = findHeader(head, isHeader);
	if (!found) {
		throw new KerbnoteError(
			'no_header',
			'no row was found that names the columns needed here',
			'Give each column its name in the first row, and separate columns by commas',
			{ row: 1 }
		);
	}
	const { delimiter, at, headers } = found;
	const { data } = Papa.parse<string[]>(head.length ? textFrom(text, at + 1) : '', { delimiter });
	const rows: TableRow[] = [];
	data.slice(0, MAX_ROWS).forEach((cells, i) => {
		if (cells.every((cell) => cell.trim() === '')) return;
		rows.push({ line: at + 2 + i, cells: headers.map((_, column) => (cells[column] ?? '').trim()) });
	});
	if (rows.length === 0) {
		throw new KerbnoteError(
			'no_data_rows',
			`the table has a header in row ${at + 1} but no rows below it`,
			'Export the table again',
			{ row: at + 1 }
		);
	}
	return { headers, rows, decimal: decimalSign(rows, delimiter) };
}

function emptyFile(): KerbnoteError {
	return new KerbnoteError('empty_file', 'the file is empty', 'Export it again and check that the file has a size');
}

function findHeader(
	lines: readonly string[],
	isHeader: (headers: readonly TableHeader[]) => boolean
): { delimiter: string; at: number; headers: TableHeader[] } | null {
	for (const [at, line] of lines.entries()) {
		if (line.trim() === '') continue;
		const widest = DELIMITERS.map((delimiter) => ({
			delimiter,
			cells: Papa.parse<string[]>(line, { delimiter }).data[0]
		}))
			.filter(({ cells }) => cells !== undefined)
			.sort((a, b) => b.cells.length - a.cells.length);
		for (const { delimiter, cells } of widest) {
			const headers = cells.map((text) => ({ text: text.trim(), ...readHeaderText(text) }));
			if (isHeader(headers)) return { delimiter, at, headers };
		}
	}
	return null;
}

/** The text from a line on (0-based), found without splitting all of it. */
function textFrom(text: string, line: number): string {
	const ends = /\r\n|\n|\r/g;
	for (let i = 0; i < line; i++) if (!ends.exec(text)) return '';
	return text.slice(ends.lastIndex);
}

/** A comma, where columns are not separated by commas and more cells hold a lone comma than a point. */
function decimalSign(rows: readonly TableRow[], delimiter: string): '.' | ',' {
	let comma = 0;
	let point = 0;
	for (const { cells } of rows.slice(0, 200)) {
		for (const cell of cells) {
			if (/^[+-]?\d*,\d+$/.test(cell)) comma++;
			else if (/\d*\.\d+$/.test(cell)) point++;
		}
	}
	return comma > (delimiter === ',' ? 4 * point : point) ? ',' : '.';
}
