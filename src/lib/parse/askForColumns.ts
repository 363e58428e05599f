import { channelSchema } from '../schemas/channels.ts';
import type { ImportQuestion } from '../schemas/importQuestion.ts';
import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import type { Table } from './findTable.ts';
import type { ColumnPlan } from './planColumns.ts';
import { suggestChannels } from './suggestChannels.ts';

/** Columns that are shown to the person: as many as anybody reads through. */
const MAX_SHOWN = 200;

/**
 * The question that only a person can answer: which column is which.
 *
 * @param suggested by column: what its values look like; absent, what its name was taken for
 */
export function askForColumns(
	text: string,
	plans: readonly ColumnPlan[],
	suggested: readonly (string | null)[] = plans.map(({ channel }) => channel)
): ImportQuestion {
	return {
		kind: 'columns',
		text,
		needs: [
			['time', 'lapTime'],
			['speed', 'distance', 'lapDistance', 'latitude', 'positionX']
		],
		columns: plans.slice(0, MAX_SHOWN).map(({ header, samples }, index) => {
			const channel = channelSchema.safeParse(suggested[index]);
			return { header, index, samples, suggested: channel.success ? channel.data : null };
		})
	};
}

/**
 * Asks what the columns are where no name of any of them is understood, or none has a name.
 *
 * @throws {KerbnoteError} `needs_answer`, `no_header` where no answer could make it a run
 */
export function askAboutNames(table: Table, plans: readonly ColumnPlan[]): void {
	const { headerLine, firstDataLine } = table;
	if (plans.some(({ channel, mapped }) => channel !== null && (mapped || headerLine !== null))) return;
	const suggested = suggestChannels(table);
	const place = { row: headerLine ?? firstDataLine };
	if (!suggested.includes('time') && headerLine === null) {
		throw new KerbnoteError(
			'no_header',
			'the table has no row of column names above its numbers, and no column that runs like time',
			'Export the file with a header row, or add one as the first line',
			place
		);
	}
	const message =
		headerLine === null
			? 'the table has no row of column names above its numbers'
			: `none of the column names in row ${headerLine} is understood`;
	throw new KerbnoteError('needs_answer', message, 'Say which column holds the time and which the speed', {
		...place,
		question: askForColumns('Which column is which?', plans, suggested)
	});
}
