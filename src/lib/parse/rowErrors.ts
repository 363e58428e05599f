import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { MAX_ROW_BYTES } from './rowPlan.ts';

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
		'too_large',
		`row ${line} is longer than ${MAX_ROW_BYTES} bytes`,
		'Check that the file has line ends and is a CSV of one run',
		{ row: line }
	);
}
