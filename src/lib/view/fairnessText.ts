import type { Fairness } from '../schemas/views.ts';

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
