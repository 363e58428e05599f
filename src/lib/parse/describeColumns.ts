import type { SourceColumn } from '../schemas/analysisDocument.ts';
import { channelSchema } from '../schemas/channels.ts';
import { rangeOf } from './columns.ts';
import type { Ranges } from './columns.ts';
import type { ColumnPlan } from './planColumns.ts';

/**
 * What was understood of each column of the file, in its order: for the person who checks it.
 *
 * @param plans all columns
 * @param used the columns in use, by channel (a distance that restarts stands under both its names)
 * @param ranges by channel, in house units
 * @param units by channel, as in the file
 * @param seconds the file's clock, for the range of the time column
 */
export function describeColumns(
	plans: readonly ColumnPlan[],
	used: ReadonlyMap<string, ColumnPlan>,
	ranges: Ranges,
	units: ReadonlyMap<string, string>,
	seconds: Float64Array
): SourceColumn[] {
	const timePlan = used.get('time') ?? used.get('lapTime');
	return plans.map((plan): SourceColumn => {
		const channel = plan.channel === 'distance' && used.get('lapDistance') === plan ? 'lapDistance' : plan.channel;
		const published = channelSchema.safeParse(channel);
		const none = { min: NaN, max: NaN };
		const { min, max } = plan === timePlan ? rangeOf(seconds) : ((channel && ranges.get(channel)) ?? none);
		return {
			header: plan.header,
			channel: published.success ? published.data : null,
			unit: (channel && units.get(channel)) ?? plan.unit?.id ?? '',
			confidence: Math.round(plan.confidence * 100) / 100,
			min: Number.isFinite(min) ? min : null,
			max: Number.isFinite(max) ? max : null,
			samples: plan.samples,
			...(plan.turned ? { turned: true } : {})
		};
	});
}
