import { formatDay, type DateFormat } from '../../../../lib/format/date.ts';
import { formatLapTime } from '../../../../lib/format/lapTime.ts';
import type { LapHead, RunView } from '../../../../lib/schemas/views.ts';
import { CONDITIONS_TEXT } from '../../../../lib/texts/runs.ts';

export interface LapOption {
	id: string;
	label: string;
}
export interface LapGroup {
	label: string;
	options: LapOption[];
}

/**
 * What a lap may be laid on, grouped as a person looks for it: the shelf, what others share, own other runs, this run.
 * A lap stands in the first group that it fits; empty groups are left out.
 */
export function referenceGroups(
	{ id, laps, references }: Pick<RunView, 'id' | 'laps' | 'references'>,
	dates: DateFormat
): LapGroup[] {
	const group = (label: string, belongs: (lap: LapHead) => boolean): LapGroup => ({
		label,
		options: references.filter(belongs).map((lap) => ({ id: lap.id, label: describe(lap, dates) }))
	});
	const fromHere = new Set(laps.map((lap) => lap.id));
	const here = laps
		.filter((lap) => lap.kind === 'timed')
		.map((lap) => ({
			id: lap.id,
			label: `lap ${lap.number}, ${formatLapTime(lap.timeS)}${lap.clean ? '' : ', not clean'}`
		}));
	return [
		group('On the shelf', (lap) => lap.shelfName !== null),
		group('Shared with you', (lap) => lap.shelfName === null && !lap.own && lap.runId !== id),
		group('Your other runs', (lap) => lap.shelfName === null && lap.own && lap.runId !== id && !fromHere.has(lap.id)),
		{ label: 'This run', options: here }
	].filter(({ options }) => options.length > 0);
}

function describe(lap: LapHead, dates: DateFormat) {
	const day = lap.startedAt === null ? null : formatDay(lap.startedAt, dates);
	const who = lap.shelfName ?? (lap.own ? `lap ${lap.number}` : lap.driver.name);
	const conditions = lap.conditions === 'unknown' ? null : CONDITIONS_TEXT[lap.conditions];
	return [who, formatLapTime(lap.timeS), day, lap.car?.name, conditions].filter(Boolean).join(', ');
}
