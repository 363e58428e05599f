import type { SourceColumn } from '../../../lib/schemas/analysisDocument.ts';
import type { Channel } from '../../../lib/schemas/channels.ts';
import type { ColumnMapping } from '../../../lib/schemas/columnMapping.ts';

/** Channels that a person can set by hand; the rest is found or not. */
export const CHOOSABLE = [
	'time',
	'lap',
	'distance',
	'speed',
	'brake',
	'throttle',
	'steering',
	'gear',
	'latitude',
	'longitude',
	'accLong',
	'accLat',
	'yawRate'
] as const satisfies readonly Channel[];
export type Choosable = (typeof CHOOSABLE)[number];

/** Units that are worth offering; the reader knows more, and finds those by itself. */
export const UNIT_CHOICES: Partial<Record<Choosable, readonly string[]>> = {
	time: ['s', 'ms', 'min'],
	distance: ['m', 'km', 'ft', 'mi'],
	speed: ['km/h', 'm/s', 'mph', 'kn'],
	brake: ['%', '0..1', 'bar', 'kPa', 'psi', 'N', 'raw counts', 'switch'],
	throttle: ['%', '0..1', 'raw counts'],
	steering: ['deg', 'rad'],
	accLong: ['m/s²', 'g'],
	accLat: ['m/s²', 'g'],
	yawRate: ['rad/s', 'deg/s']
};

export type MappingAnswer =
	| { mapping: ColumnMapping; problem: null }
	/** a sentence for the person who chose */
	| { mapping: null; problem: string };

/**
 * What a person chose in the form of columns, as the reader takes it: an entry for every column that is chosen, left out or was not
 * used before, so that an earlier choice is not lost when another one is added.
 *
 * @param fields `column:<channel>` holds a column's place or "", `unit:<channel>` a unit or ""
 * @param columns of the file, in its order, as they are understood now
 */
export function mappingFromForm(fields: ReadonlyMap<string, string>, columns: readonly SourceColumn[]): MappingAnswer {
	const channelAt = new Map<number, Choosable>();
	for (const channel of CHOOSABLE) {
		const answer = fields.get(`column:${channel}`) ?? '';
		if (answer === '') continue;
		const index = Number(answer);
		if (!Number.isInteger(index) || columns[index] === undefined) {
			return { mapping: null, problem: 'One of the columns is not in this file. Choose again.' };
		}
		if (channelAt.has(index)) {
			return {
				mapping: null,
				problem: `The column “${columns[index].header}” is chosen twice. Choose another for one of them.`
			};
		}
		channelAt.set(index, channel);
	}
	if (![...channelAt.values()].includes('time')) {
		return { mapping: null, problem: 'Time needs a column: without it there is nothing to measure.' };
	}
	const choosable = new Set<string>(CHOOSABLE);
	return {
		problem: null,
		mapping: {
			columns: columns.flatMap((column, index): ColumnMapping['columns'] => {
				const channel = channelAt.get(index) ?? null;
				if (channel === null) {
					const isOurs = column.channel === null || choosable.has(column.channel);
					return isOurs ? [{ header: column.header, index, channel: null }] : [];
				}
				const unit = fields.get(`unit:${channel}`) || (column.channel === channel ? column.unit : '');
				return [{ header: column.header, index, channel, ...(unit === '' ? {} : { unit }) }];
			})
		}
	};
}
