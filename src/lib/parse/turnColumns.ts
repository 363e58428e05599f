import type { Channel } from '../schemas/channels.ts';
import { rangeOf } from './columns.ts';
import type { Columns, Ranges } from './columns.ts';
import type { ColumnPlan } from './planColumns.ts';

/** Channels with a zero to turn about; right and left, or forward and backward, change places. */
const SIGNED: ReadonlySet<Channel> = new Set(['steering', 'accLong', 'accLat', 'yawRate']);
/** Channels that rest at one end of their range: the ends change places. */
const PEDALS: ReadonlySet<Channel> = new Set(['brake', 'brakeRear', 'throttle']);

/**
 * Turns the columns round that a person says count the other way.
 *
 * @param columns changed in place, as read and before units
 * @param ranges by channel; kept in step
 * @param plans the plan of each channel's column
 */
export function turnColumns(columns: Columns, ranges: Ranges, plans: ReadonlyMap<string, ColumnPlan>): void {
	for (const channel of [...SIGNED, ...PEDALS]) {
		const column = columns.get(channel);
		if (!column || !plans.get(channel)?.turned) continue;
		const { min, max } = ranges.get(channel) ?? rangeOf(column);
		const about = PEDALS.has(channel) ? min + max : 0;
		for (let i = 0; i < column.length; i++) column[i] = about - column[i];
		ranges.set(channel, { min: about - max, max: about - min });
	}
}
