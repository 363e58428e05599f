import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { clean, describeTable } from './describeTable.ts';
import { findBody } from './findBody.ts';
import type { Body, Delimiter } from './findBody.ts';
import { recogniseColumn } from './recogniseColumns.ts';
import { noText } from './refuseForeign.ts';
import { tooLong, tooManyColumns } from './rowErrors.ts';
import { MAX_COLUMNS, MAX_ROW_BYTES } from './rowPlan.ts';
import { splitLine } from './splitLine.ts';
import { splitSpaced } from './splitSpaced.ts';

/** Where the table stands in the text and how its cells are written. Lines are 1-based, as an editor counts them. */
export interface Table {
	delimiter: Delimiter;
	decimal: '.' | ',';
	/** null where no row names the columns */
	headerLine: number | null;
	firstDataLine: number;
	/** "column 1" and so on where no row names them */
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
/** A line of a text that holds no table is called endless from here on. */
const LONG_LINE = MAX_ROW_BYTES / 8;

/**
 * Finds the table in a file's first lines: delimiter, decimal sign, header row, row of units, first row of data, and the lines
 * above as metadata. What decides is the body: the delimiter under which most rows have one width and mostly numbers.
 *
 * @param text decoded first part of the file
 * @param wholeFile false: the last line may be cut and is left out
 * @throws {KerbnoteError} `empty_file`, `no_data_rows`, `not_csv`, `too_many_columns`, `line_too_long`
 */
export function findTable(text: string, wholeFile: boolean): Table {
	const lines = text.split(/\r\n|\n|\r/, MAX_LINES + 1);
	if (lines.length > MAX_LINES || !wholeFile) lines.pop();
	if (!lines.some((line) => line.trim() !== '')) throw noText();
	let best: Body | null = null;
	for (const delimiter of DELIMITERS) best = better(best, findBody(lines, delimiter));
	// Spaces stand in any file; they separate cells only where nothing else does.
	if (!best || best.names < 2) best = better(best, findBody(lines, ' '));
	if (!best) return refuse(lines);
	if (best.width > MAX_COLUMNS) throw tooManyColumns(best.firstRow + 1, best.width);
	return describeTable(lines, best);
}

function better(best: Body | null, body: Body | null): Body | null {
	return body && (!best || body.score > best.score) ? body : best;
}

function refuse(lines: readonly string[]): never {
	for (const delimiter of [...DELIMITERS, ' ' as const]) {
		for (let i = 0; i < lines.length; i++) {
			const cells = delimiter === ' ' ? splitSpaced(lines[i]) : splitLine(lines[i], delimiter);
			if (cells.length > MAX_COLUMNS && delimiter !== ' ') throw tooManyColumns(i + 1, null);
			if (cells.length < 2 || cells.filter((cell) => recogniseColumn(clean(cell)).channel !== null).length < 2)
				continue;
			throw new KerbnoteError(
				'no_data_rows',
				`the table has a header in row ${i + 1} but no rows of numbers below it`,
				'Export the run again and check that the recording holds laps',
				{ row: i + 1 }
			);
		}
	}
	const long = lines.findIndex((line) => line.length > LONG_LINE);
	if (long >= 0) throw tooLong(long + 1);
	throw new KerbnoteError(
		'not_csv',
		'the file is text, but no table of numbers was found in it',
		'Export the run as CSV with a header row and upload that file',
		{ row: 1 }
	);
}
