import type { Channel } from '../schemas/channels.ts';
import type { Dimension } from './columnUnits.ts';
import type { Concept } from './columnWords.ts';

/** What a column's words and unit must be for it to be a channel. */
export interface Rule {
	channel: Channel;
	/** every group must be met by at least one of its concepts */
	needs: readonly (readonly Concept[])[];
	/** concepts that rule it out */
	without?: readonly Concept[];
	/** concepts that belong to it and cost no confidence */
	fits?: readonly Concept[];
	dimensions: readonly Dimension[];
	confidence?: number;
}

const PEDAL: readonly Dimension[] = ['ratio', 'pressure', 'force', 'count', 'angle', 'length'];
const ACCELERATION: readonly Dimension[] = ['acceleration'];
const WHEEL: readonly Dimension[] = ['speed', 'angularVelocity'];

/** In order: the first rule whose concepts are there wins among equals, so the more specific come first. */
export const RULES: readonly Rule[] = [
	{
		channel: 'lastLapTime',
		needs: [['last'], ['lap']],
		fits: ['time'],
		without: ['distance', 'number'],
		dimensions: ['time']
	},
	{
		channel: 'lapTime',
		needs: [['lap'], ['time']],
		without: ['last', 'distance', 'speed', 'revolutions'],
		dimensions: ['time']
	},
	{ channel: 'lapDistance', needs: [['lap'], ['distance']], fits: ['position', 'driven'], dimensions: ['length'] },
	{ channel: 'beacon', needs: [['beacon']], fits: ['lap', 'number'], dimensions: ['count', 'time'] },
	{
		channel: 'lap',
		needs: [['lap']],
		fits: ['number'],
		without: ['speed', 'engine', 'revolutions', 'yaw', 'rate'],
		dimensions: ['count']
	},
	...(['fl', 'fr', 'rl', 'rr'] as const).map((corner): Rule => {
		const channel = ({ fl: 'wheelSpeedFl', fr: 'wheelSpeedFr', rl: 'wheelSpeedRl', rr: 'wheelSpeedRr' } as const)[
			corner
		];
		return {
			channel,
			needs: [['wheel', 'speed'], [corner]],
			fits: ['speed', 'wheel', 'revolutions', 'rate'],
			without: ['brake', 'pressure', 'steering', 'force'],
			dimensions: WHEEL
		};
	}),
	...(
		[
			['wheelSpeedFl', 'front', 'left'],
			['wheelSpeedFr', 'front', 'right'],
			['wheelSpeedRl', 'rear', 'left'],
			['wheelSpeedRr', 'rear', 'right']
		] as const
	).map(([channel, axle, side]): Rule => ({
		channel,
		needs: [['wheel', 'speed'], [axle], [side]],
		fits: ['speed', 'wheel', 'revolutions', 'rate'],
		without: ['brake', 'pressure', 'steering', 'force'],
		dimensions: WHEEL
	})),
	{
		channel: 'brakeRear',
		needs: [['brake'], ['rear', 'rr', 'rl']],
		fits: ['pressure', 'pedal', 'position', 'force'],
		without: ['speed'],
		dimensions: PEDAL
	},
	{
		channel: 'brake',
		needs: [['brake']],
		fits: ['pressure', 'pedal', 'position', 'force', 'front'],
		without: ['speed', 'rear', 'fl', 'fr', 'rl', 'rr', 'left', 'right', 'distance', 'time'],
		dimensions: PEDAL
	},
	{
		channel: 'throttle',
		needs: [['throttle']],
		fits: ['pedal', 'position', 'angle', 'accelerator'],
		dimensions: ['ratio', 'count', 'angle']
	},
	{
		channel: 'throttle',
		needs: [['accelerator']],
		fits: ['pedal', 'position'],
		without: ['lateral', 'longitudinal', 'x', 'y', 'z', 'latShort', 'longShort', 'vertical', 'speed'],
		dimensions: ['ratio', 'count']
	},
	{
		channel: 'steering',
		needs: [['steering']],
		fits: ['angle', 'wheel', 'position'],
		without: ['speed', 'force', 'rate', 'pressure'],
		dimensions: ['angle', 'ratio', 'count']
	},
	{
		channel: 'gear',
		needs: [['gear']],
		fits: ['position', 'number'],
		without: ['speed', 'pressure'],
		dimensions: ['count']
	},
	{
		channel: 'engineSpeed',
		needs: [['engine'], ['speed', 'revolutions', 'number']],
		dimensions: ['angularVelocity', 'count']
	},
	{
		channel: 'engineSpeed',
		needs: [['revolutions']],
		fits: ['engine'],
		without: ['wheel', 'lap', 'time'],
		dimensions: ['angularVelocity', 'count']
	},
	{ channel: 'yawRate', needs: [['yawRate']], fits: ['yaw', 'rate', 'speed'], dimensions: ['angularVelocity'] },
	{
		channel: 'yawRate',
		needs: [
			['yaw', 'z'],
			['rate', 'speed']
		],
		without: ['acceleration', 'x', 'y'],
		dimensions: ['angularVelocity']
	},
	{
		channel: 'accLat',
		needs: [
			['acceleration', 'accelerator', 'force'],
			['lateral', 'latShort']
		],
		dimensions: ACCELERATION
	},
	{
		channel: 'accLong',
		needs: [
			['acceleration', 'accelerator', 'force'],
			['longitudinal', 'longShort']
		],
		dimensions: ACCELERATION
	},
	{ channel: 'accLong', needs: [['ax']], fits: ['acceleration'], dimensions: ACCELERATION, confidence: 0.8 },
	{ channel: 'accLat', needs: [['ay']], fits: ['acceleration'], dimensions: ACCELERATION, confidence: 0.8 },
	{
		channel: 'accLong',
		needs: [['acceleration', 'accelerator'], ['x']],
		without: ['y', 'z'],
		dimensions: ACCELERATION,
		confidence: 0.8
	},
	{
		channel: 'accLat',
		needs: [['acceleration', 'accelerator'], ['y']],
		without: ['x', 'z'],
		dimensions: ACCELERATION,
		confidence: 0.8
	},
	{
		channel: 'latitude',
		needs: [['latitude', 'latShort']],
		fits: ['position'],
		without: ['speed', 'acceleration', 'accelerator'],
		dimensions: ['angle', 'count']
	},
	{
		channel: 'longitude',
		needs: [['longitude', 'longShort']],
		fits: ['position'],
		without: ['speed', 'acceleration', 'accelerator'],
		dimensions: ['angle', 'count']
	},
	{
		channel: 'positionX',
		needs: [['x', 'east']],
		fits: ['position'],
		without: ['speed', 'acceleration', 'yaw', 'rate', 'angle', 'force', 'y', 'z', 'accelerator'],
		dimensions: ['length']
	},
	{
		channel: 'positionY',
		needs: [['y', 'north']],
		fits: ['position'],
		without: ['speed', 'acceleration', 'yaw', 'rate', 'angle', 'force', 'x', 'z', 'accelerator'],
		dimensions: ['length']
	},
	{
		channel: 'altitude',
		needs: [['altitude', 'z']],
		fits: ['position'],
		without: ['speed', 'acceleration', 'rate', 'yaw', 'angle', 'force', 'x', 'y', 'accelerator'],
		dimensions: ['length']
	},
	{ channel: 'heading', needs: [['heading']], fits: ['angle'], without: ['rate', 'speed'], dimensions: ['angle'] },
	{
		channel: 'fuel',
		needs: [['fuel']],
		fits: ['position', 'number'],
		without: ['pressure', 'rate', 'speed', 'accelerator', 'pedal'],
		dimensions: ['volume', 'mass', 'ratio', 'count']
	},
	{
		channel: 'speed',
		needs: [['speed']],
		fits: ['kmhWord'],
		without: [
			'wheel',
			'engine',
			'revolutions',
			'fl',
			'fr',
			'rl',
			'rr',
			'yaw',
			'rate',
			'steering',
			'brake',
			'lateral',
			'longitudinal',
			'latShort',
			'longShort',
			'vertical',
			'x',
			'y',
			'z',
			'gear',
			'acceleration',
			'time'
		],
		dimensions: ['speed']
	},
	{ channel: 'speed', needs: [['kmhWord']], without: ['wheel'], dimensions: ['speed'], confidence: 0.8 },
	{
		channel: 'speed',
		needs: [['speed']],
		fits: ['longitudinal', 'longShort', 'x'],
		without: [
			'wheel',
			'engine',
			'lateral',
			'latShort',
			'vertical',
			'y',
			'z',
			'yaw',
			'rate',
			'time',
			'revolutions',
			'steering',
			'acceleration'
		],
		dimensions: ['speed'],
		confidence: 0.6
	},
	// One wheel's or the wheels' speed stands in for the car's where there is no other.
	{
		channel: 'speed',
		needs: [['wheel'], ['speed']],
		without: ['fl', 'fr', 'rl', 'rr', 'left', 'right', 'steering', 'lateral', 'force'],
		fits: ['front', 'rear'],
		dimensions: ['speed'],
		confidence: 0.55
	},
	{
		channel: 'distance',
		needs: [['distance']],
		fits: ['driven', 'kmhWord'],
		without: ['lap', 'brake', 'time', 'speed'],
		dimensions: ['length']
	},
	{
		channel: 'time',
		needs: [['time']],
		fits: ['number'],
		without: ['lap', 'last', 'distance', 'brake', 'gear'],
		dimensions: ['time']
	}
];
