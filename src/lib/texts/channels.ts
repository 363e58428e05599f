import type { Channel } from '../schemas/channels.ts';

/** What each channel is called on a page. */
export const CHANNEL_TEXT: Record<Channel, string> = {
	time: 'Time',
	lapTime: 'Lap time so far',
	lastLapTime: 'Last lap time',
	lap: 'Lap',
	beacon: 'Lap beacon',
	distance: 'Distance',
	lapDistance: 'Distance in the lap',
	speed: 'Speed',
	brake: 'Brake',
	brakeRear: 'Brake, rear',
	throttle: 'Throttle',
	steering: 'Steering',
	gear: 'Gear',
	engineSpeed: 'Engine speed',
	latitude: 'Latitude',
	longitude: 'Longitude',
	positionX: 'Position x',
	positionY: 'Position y',
	altitude: 'Altitude',
	heading: 'Heading',
	accLong: 'Long. acceleration',
	accLat: 'Lat. acceleration',
	yawRate: 'Yaw rate',
	wheelSpeedFl: 'Wheel speed, front left',
	wheelSpeedFr: 'Wheel speed, front right',
	wheelSpeedRl: 'Wheel speed, rear left',
	wheelSpeedRr: 'Wheel speed, rear right',
	fuel: 'Fuel'
};

/** The order in which a person looks for them: what is needed first, then the pedals, then the rest. */
export const CHANNEL_ORDER = [
	'time',
	'distance',
	'speed',
	'brake',
	'throttle',
	'steering',
	'gear',
	'engineSpeed',
	'latitude',
	'longitude',
	'positionX',
	'positionY',
	'accLong',
	'accLat',
	'yawRate',
	'wheelSpeedFl',
	'wheelSpeedFr',
	'wheelSpeedRl',
	'wheelSpeedRr',
	'lap',
	'beacon',
	'lapDistance',
	'lapTime',
	'lastLapTime',
	'brakeRear',
	'altitude',
	'heading',
	'fuel'
] as const satisfies readonly Channel[];

/** Fails to compile when a channel is missing from the order above. */
type Missing = Exclude<Channel, (typeof CHANNEL_ORDER)[number]>;
export const EVERY_CHANNEL_IS_ORDERED: [Missing] extends [never] ? true : Missing = true;
