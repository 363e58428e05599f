import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import type { ColumnPlan } from './planColumns.ts';

/** The refusal of a table without a column that every run needs; names the columns that there are. */
export function missingColumn(
	code: 'missing_time' | 'missing_speed',
	what: string,
	plans: readonly ColumnPlan[]
): KerbnoteError {
	const headers = plans
		.slice(0, 12)
		.map(({ header }) => header.slice(0, 40))
		.join(', ');
	return new KerbnoteError(
		code,
		`no column for ${what} was recognised among: ${headers}`,
		`Export the run with ${what}, or say on the upload page which column it is`
	);
}
