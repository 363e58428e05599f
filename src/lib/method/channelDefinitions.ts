import { OWN_DEFINITION, type DefinitionGroup } from './definition.ts';

export const CHANNEL_DEFINITIONS: DefinitionGroup = {
	id: 'channels',
	title: 'Channels',
	lead: 'A file needs time, and one of speed, distance or position. Each further channel adds what it alone can tell; what a file lacks takes away only that.',
	definitions: [
		{
			term: 'Time',
			unit: 's',
			meaning:
				'Seconds from the first sample of the run. Clock times, milliseconds, epochs and times that restart each lap or at midnight are read as what they are.',
			source: 'ISO 8601'
		},
		{
			term: 'Distance',
			unit: 'm',
			meaning:
				'Metres along the run. Without a column it is the sum of speed over time by trapezoids, or the length between positions.',
			source: OWN_DEFINITION
		},
		{
			term: 'Speed',
			unit: 'km/h',
			meaning: 'As recorded, from m/s, mph or knots where the file has those. Its scale is checked against positions.',
			source: 'SI; international mile (1959)',
			limits:
				'A speed taken from a driven or locking wheel is said to be one. A speed made from positions is smoother than the car.'
		},
		{
			term: 'Brake',
			unit: '%',
			meaning:
				'Per cent of full pedal above rest, where rest is the median at full throttle. A pressure stays a pressure, and gains a per cent only by a full-pressure value of the car.',
			source: OWN_DEFINITION,
			limits:
				'With no full value set, the 99.5th percentile of the run’s braking stands in, the page says so, and nothing is said about too much pressure. An on/off brake gives beginning and end only.'
		},
		{
			term: 'Throttle',
			unit: '%',
			meaning:
				'Per cent between the run’s own rest and full levels: an idle of 8 % and a full pedal of 97 % read as 0 and 100.',
			source: OWN_DEFINITION
		},
		{
			term: 'Steering',
			unit: '°',
			meaning: 'Degrees at the wheel, left positive.',
			source: 'ISO 8855'
		},
		{
			term: 'Position',
			unit: 'm',
			meaning: 'Latitude and longitude become local metres on the ellipsoid. Zeros are no position.',
			source: 'WGS 84; Karney 2013, Algorithms for geodesics'
		},
		{
			term: 'Wheel speeds',
			unit: 'km/h',
			meaning: 'Speed of each tread; rolling radius and clock lag are fitted where the car rolls freely.',
			source: OWN_DEFINITION,
			limits: 'Without them no lock-up is claimed; we can still say “near locking”.'
		}
	]
};
