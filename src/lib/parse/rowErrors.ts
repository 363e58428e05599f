import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { MAX_COLUMNS, MAX_ROW_BYTES } from './rowPlan.ts';

/** A quote that swallows the rest of the file. */
export function unclosedQuote(line: number): KerbnoteError {
	return new KerbnoteError(
		'unclosed_quote',
		`row ${line} opens a quote that is never closed`,
		'Add the missing double quote in that row, or remove the one that opens it',
		{ row: line }
	);
}

/** A row without end. */
export function tooLong(line: number): KerbnoteError {
	return new KerbnoteError(
		'line_too_long',
		`row ${line} does not end within ${MAX_ROW_BYTES} bytes, so this is no table`,
		'Check that the file has line ends, and export the run as CSV with one row per sample',
		{ row: line }
	);
}

/** A table wider than any run. */
export function tooManyColumns(line: number, columns: number | null): KerbnoteError {
	const had = columns === null ? `more than ${MAX_COLUMNS}` : String(columns);
	return new KerbnoteError(
		'too_many_columns',
		`row ${line} has ${had} columns, at most ${MAX_COLUMNS} can be read`,
		'Export only the channels of the run, one row per sample',
		{ row: line }
	);
}
