import { formatDay, type DateFormat } from '../format/date.ts';
import { formatLapTime } from '../format/lapTime.ts';
import type { Fairness, LapHead } from '../schemas/views.ts';

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

/** What a reader must know before trusting the pair, one sentence each. */
export const FAIRNESS_TEXT: Record<Fairness, string> = {
	other_car: 'The two laps were driven in different cars.',
	car_unknown: 'The car of one lap is not known, so it may not be the same.',
	other_conditions: 'The two laps were driven in different conditions.',
	conditions_unknown: 'The conditions of one lap are not known.',
	other_place: 'One lap comes from a simulator and the other from a circuit.',
	driver_lap_not_clean: 'The driver’s lap is not clean.',
	reference_not_clean: 'The reference lap is not clean.'
};
