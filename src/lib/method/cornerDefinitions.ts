import { COMMON_PRACTICE, OWN_DEFINITION, type DefinitionGroup } from './definition.ts';

export const CORNER_DEFINITIONS: DefinitionGroup = {
	id: 'corners',
	title: 'Corners',
	lead: 'Corners come from the curvature of the path, so that they are the same for every lap.',
	definitions: [
		{
			term: 'Corner',
			meaning:
				'A stretch that turns one way by at least 15°, and is tighter than 300 m, or uses over 40 % of the car’s cornering, or is braked or lifted for. Gentler bends are kinks: listed, without a number.',
			source: OWN_DEFINITION,
			limits: 'From speed alone, places are less sharp and the page says so.'
		},
		{
			term: 'Start and end',
			unit: 'm',
			meaning:
				'Where the curvature, drawn on as a straight line from 30 % and 70 % of its peak, reaches zero; at most half-way to the neighbour.',
			source: OWN_DEFINITION
		},
		{
			term: 'Apex',
			unit: 'm',
			meaning:
				'The centre of the curvature’s peak. Two peaks with a valley under 70 % make a double apex with two places.',
			source: 'geometric apex, trade sense'
		},
		{
			term: 'Radius',
			unit: 'm',
			meaning: 'The driven one: of the path that was taken, not of the tarmac’s edge.',
			source: OWN_DEFINITION,
			limits: 'On banking, without positions, it is the apparent radius.'
		},
		{
			term: 'Turn-in',
			unit: 'm',
			meaning: 'Where the lap’s own curvature, or steering, leaves its level of the approach for good.',
			source: 'trade sense'
		},
		{
			term: 'Linked',
			meaning:
				'Under 2.0 s from the end of one corner to the start of the next, with no full throttle for over 0.7 s between them in the reference. A linked chain is judged as one as well.',
			source: COMMON_PRACTICE
		}
	]
};
