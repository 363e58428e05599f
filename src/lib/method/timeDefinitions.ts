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
			term: 'Starting values of a coach',
			meaning:
				'Peak brake of a heavy stop that spares the front tyres about 75 %; a medium corner begun while turning 50–60 %; the second of a linked pair about 30 %; a light hold of 0.5–0.7 s; a lock-up costs 0.2–0.3 s.',
			source: COMMON_PRACTICE,
			limits: 'A coach may change each of them.'
		}
	]
};
