import { COMMON_PRACTICE, OWN_DEFINITION, type DefinitionGroup } from './definition.ts';

export const PEDAL_DEFINITIONS: DefinitionGroup = {
	id: 'pedals',
	title: 'Brake, throttle and speed',
	lead: 'Measured on the run’s own samples, between which the crossing of a level is interpolated.',
	definitions: [
		{
			term: 'Brake onset',
			unit: 'm',
			meaning:
				'First crossing of rest + 5 %. Applications under 0.5 s apart with no acceleration between are one; dabs are counted.',
			source: OWN_DEFINITION
		},
		{
			term: 'Peak brake',
			unit: '%',
			meaning:
				'The highest level held for at least 0.05 s, so that a spike does not count; the raw maximum stands beside it.',
			source: OWN_DEFINITION
		},
		{
			term: 'Release',
			unit: 's',
			meaning:
				'From the end of the last level above half of the peak to off (below rest + 2 % for 0.1 s). Progressive when its slope only falls.',
			source: OWN_DEFINITION
		},
		{
			term: 'Trail braking',
			unit: 'm, s',
			meaning: 'Braking after turn-in.',
			source: 'trade sense'
		},
		{
			term: 'Light hold',
			unit: 's',
			meaning: 'Between 2 % and 12 % at a level (slope under 15 % a second) for at least 0.2 s while the car turns.',
			source: COMMON_PRACTICE
		},
		{
			term: 'Lock-up',
			meaning:
				'Slip of a wheel below −0.3 for at least 0.05 s while braking above 20 km/h; slip is (wheel speed − speed) / speed, taken at that wheel. The wheel is named.',
			source: 'longitudinal slip by ISO 8855; the limits are ours',
			limits: 'Never claimed without wheel speeds.'
		},
		{
			term: 'Throttle pick-up',
			unit: 'm',
			meaning:
				'First upward crossing of rest + 5 % after the brake is off, or after the lift where there is no brake. Dips under 0.5 s are closed; a later dip of over 20 % is a second lift.',
			source: OWN_DEFINITION
		},
		{
			term: 'Full throttle',
			unit: 'm',
			meaning: 'First crossing of 95 % after the pick-up.',
			source: OWN_DEFINITION
		},
		{
			term: 'Coasting',
			unit: 's',
			meaning: 'Brake off and throttle under 5 %, from the lift to the pick-up.',
			source: 'trade sense'
		},
		{
			term: 'Shares of coasting',
			unit: 's',
			meaning: 'Coasting before the brake, between two brakings, and after the brake.',
			source: OWN_DEFINITION
		},
		{
			term: 'Level of a hold',
			unit: '%',
			meaning: 'Mean of the longest level stretch between 2 % and 25 % after the peak, while the car turns.',
			source: OWN_DEFINITION
		},
		{
			term: 'Strength of a braking',
			unit: 'm/s²',
			meaning: 'Mean deceleration from the peak to the last moment above 80 % of it.',
			source: OWN_DEFINITION,
			limits: 'Not said under 0.25 s.'
		},
		{
			term: 'Time of wheelspin',
			unit: 's',
			meaning:
				'Time from the apex to 1 s behind the corner with a wheel over 10 % faster than the ground while the throttle is over 20 %, in stretches of 0.1 s and more.',
			source: 'longitudinal slip by ISO 8855; the limits are ours'
		},
		{
			term: 'Idle gap',
			unit: 's',
			meaning:
				'Between linked corners: time in which the car neither turns (under 2 m/s²), nor brakes, nor accelerates with half of what it can at that speed.',
			source: OWN_DEFINITION
		},
		{
			term: 'Minimum speed',
			unit: 'km/h',
			meaning:
				'The lowest speed in the corner and its place. Entry and exit speed are those at the corner’s start and end.',
			source: 'trade sense',
			limits: 'An outcome: it is told together with an action.'
		}
	]
};
