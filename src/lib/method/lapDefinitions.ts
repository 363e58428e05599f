import { COMMON_PRACTICE, OWN_DEFINITION, type DefinitionGroup } from './definition.ts';

export const LAP_DEFINITIONS: DefinitionGroup = {
	id: 'laps',
	title: 'Laps and the path',
	lead: 'A lap runs from one crossing of the line to the next. The crossing lies between two samples and is computed there, never rounded to one.',
	definitions: [
		{
			term: 'Lap time',
			unit: 's',
			meaning:
				'Time between two crossings of the line. The lap column or beacon comes first, then the crossing by position, then the reset of a distance, then the length of the lap.',
			source: 'trade sense',
			limits: 'From a lap column alone the time is as fine as the samples, and carries its ±.'
		},
		{
			term: 'Clean lap',
			meaning:
				'Timed; at least 99 % of the path’s length; no drop-out over 0.5 s; no stop; never over 10 m off the path for 1 s; not neutralised; no slower than 107 % of the lower quartile of the run’s timed laps.',
			source: COMMON_PRACTICE
		},
		{
			term: 'Theoretical best',
			unit: 's',
			meaning:
				'The best clean pass of each cell, added up. Cells have fixed borders, cut before the earliest usual braking; a linked chain of corners is one cell.',
			source: OWN_DEFINITION,
			limits: 'A sum of passes that no single lap drove: a direction, not a promise.'
		},
		{
			term: 'Path',
			unit: 'm',
			meaning:
				'One reference line for a layout. Places are metres along it from the line. Each sample is projected on it, always forwards, so that laps on different lines stay side by side.',
			source: OWN_DEFINITION,
			limits: 'Without positions, distance is stretched between matched speed minima; the page says so.'
		},
		{
			term: '± of a place',
			unit: 'm',
			meaning:
				'What remains after channel lags and the offset between two runs are fitted: pedals whose clock differs by over 0.06 s against the car’s motion are moved, and the file says so. Differences within it are “the same place”.',
			source: OWN_DEFINITION
		},
		{
			term: 'Spread',
			unit: 's',
			meaning: 'Standard deviation of the times in a cell over the clean laps of a run (n − 1).',
			source: 'textbook statistics',
			limits: 'Not said under three laps.'
		}
	]
};
