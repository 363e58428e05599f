import type { Conditions, Intent, Place } from '../../schemas/views.ts';

/** What must be known of a run before anything may be advised. */
export interface Circumstances {
	/** unknown is treated as a real car */
	place: Place;
	/** damp is treated as wet */
	conditions: Conditions;
	intent: Intent;
	/** a run on an open road gets no advice */
	openRoad: boolean;
	/** the lap lies in a neutralised stretch */
	neutralised: boolean;
	/** which timed lap of the run this is, from 1; null where not known */
	timedLap: number | null;
	/** somebody said so */
	coldTyres: boolean;
	/** a fade sign was seen in the run */
	fade: boolean;
	/** a kart with brakes on the rear axle alone */
	rearBrakesOnly: boolean;
	beginner: boolean;
	/** corners without run-off, as a coach marked them */
	noRunOff: readonly number[];
	/** a coach turned trail and light-hold advice on for this driver */
	trailAllowed: boolean;
}

/** Nothing is known: treated as a real car on a dry track, past its first laps. */
export const UNKNOWN_CIRCUMSTANCES: Circumstances = {
	place: 'unknown',
	conditions: 'unknown',
	intent: 'unknown',
	openRoad: false,
	neutralised: false,
	timedLap: null,
	coldTyres: false,
	fade: false,
	rearBrakesOnly: false,
	beginner: false,
	noRunOff: [],
	trailAllowed: false
};
