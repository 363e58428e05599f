import { formatDay, type DateFormat } from '../format/date.ts';
import { formatLapTime } from '../format/lapTime.ts';
import type { LapHead } from '../schemas/views.ts';

/** How a lap is called where it is laid on another. */
export interface LapLabel {
	/** "Mira Tansley" */
	name: string;
	/** "lap 6", "lap 3 of the same run", "3 May, lap 3" */
	which: string;
	/** "1:38.947" */
	time: string;
	/** "clean, dry, Brindle GT" */
	state: string;
}

/** The driver's lap. */
export function driverLabel(lap: LapHead): LapLabel {
	return {
		name: lap.driver.name,
		which: `lap\u00a0${lap.number}`,
		time: formatLapTime(lap.timeS),
		state: stateText(lap)
	};
}

/** The reference, seen from the driver's lap: same run, own other day, or somebody else's. */
export function referenceLabel(reference: LapHead, driver: LapHead, date: DateFormat = {}): LapLabel {
	const sameRun = reference.runId === driver.runId;
	const day = reference.startedAt === null ? null : formatDay(reference.startedAt, date);
	const lap = `lap\u00a0${reference.number}`;
	return {
		name: reference.shelfName ?? reference.driver.name,
		which: sameRun
			? `${lap} of the same run`
			: reference.driver.id === driver.driver.id || day === null
				? [day, lap].filter(Boolean).join(', ')
				: day,
		time: formatLapTime(reference.timeS),
		state: stateText(reference)
	};
}

function stateText(lap: LapHead): string {
	return [
		lap.clean ? 'clean' : 'not clean',
		lap.conditions === 'unknown' ? null : lap.conditions,
		lap.place === 'simulator' ? 'simulator' : null,
		lap.car?.name ?? null
	]
		.filter(Boolean)
		.join(', ');
}
