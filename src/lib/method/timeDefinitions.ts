import { BIN_KMH, FADE_SHARE, LEAST_READINGS } from '../analysis/car/fadeWatch.ts';
import { FIRST_LAPS, LARGEST_STEP_M } from '../analysis/findings/adviseOn.ts';
import { COMMON_PRACTICE, OWN_DEFINITION, type DefinitionGroup } from './definition.ts';

export const TIME_DEFINITIONS: DefinitionGroup = {
	id: 'time',
	title: 'Where the time went',
	lead: 'A time delta is driver minus reference at the same place, so that positive is time lost. The ledger says where; findings say why.',
	definitions: [
		{
			term: 'Time delta',
			unit: 's',
			meaning:
				'Time of the driver at a place minus time of the reference at the same place, both from their crossing of the line.',
			source: 'trade sense'
		},
		{
			term: 'Time ledger',
			unit: 's',
			meaning:
				'The lap cut into spans owned by corners: entry (to turn-in), mid (to the earlier pick-up), exit (to the next entry). A first row, the run-up, holds what was brought over the line. All rows sum to the gap within a millionth of a second.',
			source: OWN_DEFINITION,
			limits: 'Turn-in and corner end are the reference’s.'
		},
		{
			term: 'Cost of a finding',
			unit: 's',
			meaning:
				'What one measured difference took, with what it carries into later spans; there it stands as “carried in”. What no finding explains is said as that.',
			source: OWN_DEFINITION,
			limits: 'An estimate: two decimals, and “about”.'
		},
		{
			term: 'Car, tow or wind',
			unit: 's',
			meaning: 'On a straight, what arrival speed and the car’s own acceleration at full throttle do not explain.',
			source: 'point-mass physics'
		},
		{
			term: 'Habit',
			meaning:
				'A finding outside its ± and of at least 0.02 s in 70 % of five or more clean laps. Else it is a one-off.',
			source: OWN_DEFINITION,
			limits: 'With fewer clean laps neither is said.'
		},
		{
			term: 'You have already done this',
			meaning:
				'The quickest of the driver’s own clean laps in that corner that does not show the finding. Own best and own median of each cell stand beside it from three clean laps on.',
			source: OWN_DEFINITION
		},
		{
			term: 'Best rolling lap',
			unit: 's',
			meaning: 'Least time over one full length from any start point, within clean laps that follow one another.',
			source: 'trade sense'
		},
		{
			term: 'Linked corners as one',
			unit: 's',
			meaning: 'What the corners before the last one’s exit found or lost, beside what came out of that exit.',
			source: COMMON_PRACTICE
		},
		{
			term: 'Fade watch',
			meaning: `Change of the deceleration at equal brake and equal speed (within ${BIN_KMH} km/h) over the run, by robust least squares. A sign is over ${Math.round(100 * FADE_SHARE)} % less, and clear of two standard errors.`,
			source: OWN_DEFINITION,
			limits: `Not said under three minutes or ${LEAST_READINGS} readings. After a sign: cool down, inspect.`
		},
		{
			term: 'Gates of advice',
			meaning: `Findings are facts; exercises are drafts. In a real car none asks for later braking by more than half of the gap or ${LARGEST_STEP_M} m a step, and none at all in the wet, on cold tyres, on the first ${FIRST_LAPS} timed laps, after a fade sign or where a coach marked no run-off. A softer peak is only advised where a wheel slipped. Trail and light-hold advice is off for rear-brake karts, in the wet, with rear locks and for beginners, unless a coach turns it on. Nothing is advised in neutralised stretches or on an open road, and nothing against the run’s intent.`,
			source: COMMON_PRACTICE,
			limits: 'What is not known counts as a real car. Local rules and licensed practice come first.'
		},
		{
			term: 'Starting values of a coach',
			meaning:
				'Peak brake of a heavy stop that spares the front tyres about 75 %; a medium corner begun while turning 50–60 %; the second of a linked pair about 30 %; a light hold of 0.5–0.7 s; a lock-up costs 0.2–0.3 s.',
			source: COMMON_PRACTICE,
			limits: 'A coach may change each of them.'
		}
	]
};
