import { z } from 'zod';
import type { SourceColumn } from '../../../lib/schemas/analysisDocument.ts';
import type { MappingInput } from '../../../lib/schemas/api.ts';
import { channelSchema, type Channel } from '../../../lib/schemas/channels.ts';
import type { ColumnMapping } from '../../../lib/schemas/columnMapping.ts';
import type { ImportQuestion } from '../../../lib/schemas/importQuestion.ts';
import { CHANNEL_TEXT } from '../../../lib/texts/channels.ts';

/** Channels that a person can set by hand; the rest is found or not. */
export const CHOOSABLE = [
	'time',
	'distance',
	'speed',
	'brake',
	'throttle',
	'steering',
	'gear',
	'engineSpeed',
	'latitude',
	'longitude',
	'positionX',
	'positionY',
	'accLong',
	'accLat',
	'yawRate',
	'wheelSpeedFl',
	'wheelSpeedFr',
	'wheelSpeedRl',
	'wheelSpeedRr',
	'lap',
	'beacon',
	'lapDistance',
	'lapTime'
] as const satisfies readonly Channel[];
export type Choosable = (typeof CHOOSABLE)[number];

const choosableSchema = z.enum(CHOOSABLE);
/** Is it a channel that can be set by hand? */
export function isChoosable(channel: string | null | undefined): channel is Choosable {
	return choosableSchema.safeParse(channel).success;
}

/** By any of these the reader finds laps; where none is chosen, by the place on the circuit. */
export const LAP_SOURCES = ['lap', 'beacon', 'lapDistance', 'lapTime'] as const satisfies readonly Choosable[];

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
	yawRate: ['rad/s', 'deg/s'],
	positionX: ['m', 'km', 'ft'],
	positionY: ['m', 'km', 'ft'],
	wheelSpeedFl: ['km/h', 'm/s', 'mph', 'rad/s'],
	wheelSpeedFr: ['km/h', 'm/s', 'mph', 'rad/s'],
	wheelSpeedRl: ['km/h', 'm/s', 'mph', 'rad/s'],
	wheelSpeedRr: ['km/h', 'm/s', 'mph', 'rad/s'],
	lapDistance: ['m', 'km', 'ft', 'mi'],
	lapTime: ['s', 'ms', 'min']
};

/** Channels that loggers count either way. */
export const TURNABLE: ReadonlySet<Channel> = new Set([
	'brake',
	'throttle',
	'steering',
	'accLong',
	'accLat',
	'yawRate'
]);

export type MappingAnswer =
	| { mapping: ColumnMapping; problem: null }
	/** a sentence for the person who chose */
	| { mapping: null; problem: string };

/**
 * What a person chose in the form of columns, as the reader takes it: an entry for every column that is chosen, left out or was not
 * used before, so that an earlier choice is not lost when another one is added.
 *
 * @param fields `column:<channel>` holds a column's place or "", `unit:<channel>` a unit or "", `sign:<channel>` "turned" or "";
 *   `as:<place>` the channel that a
 *   column without one is to be, which takes the channel from the column that has it
 * @param columns of the file, in its order, as they are understood now
 */
export function mappingFromForm(fields: ReadonlyMap<string, string>, columns: readonly SourceColumn[]): MappingAnswer {
	const channelAt = new Map<number, Choosable>();
	const taken = new Set<Choosable>();
	for (const [index] of columns.entries()) {
		const answer = choosableSchema.safeParse(fields.get(`as:${index}`));
		if (!answer.success) continue;
		if (taken.has(answer.data)) {
			return {
				mapping: null,
				problem: `${CHANNEL_TEXT[answer.data]} is chosen for two columns. Choose something else for one of them.`
			};
		}
		taken.add(answer.data);
		channelAt.set(index, answer.data);
	}
	for (const channel of CHOOSABLE) {
		if (taken.has(channel)) continue;
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
	const chosen = new Set(channelAt.values());
	if (!chosen.has('time') && !chosen.has('lapTime')) {
		return { mapping: null, problem: 'Time needs a column: without it there is nothing to measure.' };
	}
	return {
		problem: null,
		mapping: {
			columns: columns.flatMap((column, index): ColumnMapping['columns'] => {
				const channel = channelAt.get(index) ?? null;
				if (channel === null) {
					const isOurs = column.channel === null || isChoosable(column.channel);
					return isOurs ? [{ header: column.header, index, channel: null }] : [];
				}
				const said = taken.has(channel) ? undefined : fields.get(`unit:${channel}`);
				const unit = said || (column.channel === channel ? column.unit : '');
				const turned = TURNABLE.has(channel) && !taken.has(channel) && fields.get(`sign:${channel}`) === 'turned';
				return [
					{ header: column.header, index, channel, ...(unit === '' ? {} : { unit }), ...(turned ? { turned } : {}) }
				];
			})
		}
	};
}

/**
 * What a person answered to the question that the reader had, as it takes it.
 *
 * @param fields `as:<place>` holds the channel of a column or "", `unit:<place>` a unit or ""
 */
export function mappingFromAnswer(fields: ReadonlyMap<string, string>, question: ImportQuestion): MappingAnswer {
	const columns: ColumnMapping['columns'] = [];
	const taken = new Set<Channel>();
	for (const { header, index } of question.columns) {
		const answer = channelSchema.safeParse(fields.get(`as:${index}`));
		const channel = answer.success ? answer.data : null;
		if (channel !== null && taken.has(channel)) {
			return {
				mapping: null,
				problem: `${CHANNEL_TEXT[channel]} is chosen for two columns. Choose something else for one of them.`
			};
		}
		if (channel !== null) taken.add(channel);
		const unit = channel === null ? '' : (fields.get(`unit:${index}`) ?? '');
		columns.push({ header, index, channel, ...(unit === '' ? {} : { unit }) });
	}
	const needed = stillNeeded(taken, question);
	return needed === null ? { mapping: { columns }, problem: null } : { mapping: null, problem: needed };
}

/** What an answer must still name, as a sentence; null where it is enough. */
export function stillNeeded(chosen: ReadonlySet<Channel>, { needs }: Pick<ImportQuestion, 'needs'>): string | null {
	const open = needs.filter((group) => !group.some((channel) => chosen.has(channel)));
	if (open.length === 0) return null;
	const words = open.map((group) => {
		const names = group.map((channel) => CHANNEL_TEXT[channel].toLowerCase());
		return names.length === 1 ? names[0] : `one of ${names.slice(0, -1).join(', ')} or ${names[names.length - 1]}`;
	});
	return `Still needed: ${words.join('; ')}.`;
}

/** For whom an answer is kept: "no", "me", or an organisation, with its id. */
export function rememberFromForm(fields: ReadonlyMap<string, string>): Pick<MappingInput, 'remember' | 'organisation'> {
	const answer = fields.get('remember') ?? 'no';
	if (!answer.startsWith(ORGANISATION)) return { remember: answer === 'me' ? 'me' : 'no' };
	return { remember: 'organisation', organisation: answer.slice(ORGANISATION.length) };
}
export const ORGANISATION = 'organisation:';

/** What laps are to be counted by: one of the columns, all that the file has, or the place on the circuit. */
export const lapSourceSchema = z.enum([...LAP_SOURCES, 'all', 'place']);
export type LapSource = z.infer<typeof lapSourceSchema>;

/**
 * The mapping with which laps are counted as said. "All" lets the reader look for itself again, so columns that were left out
 * before come back.
 *
 * @param columns of the file, in its order, as they are understood now
 * @param mapping that holds now
 */
export function mappingForLaps(
	source: LapSource,
	columns: readonly SourceColumn[],
	mapping: ColumnMapping | null
): ColumnMapping | null {
	const isLapSource = (channel: Channel | null) => LAP_SOURCES.some((one) => one === channel);
	if (source === 'all') {
		const kept = mapping?.columns.filter(({ channel }) => channel !== null && !isLapSource(channel)) ?? [];
		return kept.length > 0 ? { columns: kept } : null;
	}
	const hasTime = columns.some(({ channel }) => channel === 'time');
	return {
		columns: columns.flatMap(({ header, channel, unit, turned }, index): ColumnMapping['columns'] => {
			if (channel === null) return [{ header, index, channel: null }];
			// Time within the lap may be the only time there is.
			const isLeftOut = isLapSource(channel) && channel !== source && (channel !== 'lapTime' || hasTime);
			if (isLeftOut) return [{ header, index, channel: null }];
			return [{ header, index, channel, ...(unit === '' ? {} : { unit }), ...(turned ? { turned } : {}) }];
		})
	};
}
