import type { ErrorCode } from '../schemas/codes.ts';
import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { askForColumns } from './askForColumns.ts';
import type { ColumnPlan } from './planColumns.ts';

/** The refusal of a table without a column that every run needs; names the columns that there are, and asks which one it is. */
export function missingColumn(
	code: Extract<ErrorCode, 'missing_time' | 'missing_speed'>,
	what: string,
	plans: readonly ColumnPlan[],
	headerRow: number | null
): KerbnoteError {
	const headers = plans
		.slice(0, 12)
		.map(({ header }) => header.slice(0, 40))
		.join(', ');
	return new KerbnoteError(
		code,
		`no column for ${what} was recognised among: ${headers}`,
		`Export the run with ${what}, or say on the upload page which column it is`,
		{ row: headerRow, question: askForColumns(`Which column holds ${what}?`, plans) }
	);
}
