import { z } from 'zod';

/** The channels that the product understands; what each means and its unit inside is defined on the method page. */
export const channelSchema = z.enum([
	'time',
	'lapTime',
	'lastLapTime',
	'lap',
	'beacon',
	'distance',
	'lapDistance',
	'speed',
	'brake',
	'brakeRear',
	'throttle',
	'steering',
	'gear',
	'engineSpeed',
	'latitude',
	'longitude',
	'positionX',
	'positionY',
	'altitude',
	'heading',
	'accLong',
	'accLat',
	'yawRate',
	'wheelSpeedFl',
	'wheelSpeedFr',
	'wheelSpeedRl',
	'wheelSpeedRr',
	'fuel'
]);
export type Channel = z.infer<typeof channelSchema>;

/** What a brake column measures after conversion. A pressure stays a pressure until a full-pressure value is known. */
export const brakeUnitSchema = z.enum(['pct', 'bar', 'n', 'raw', 'switch']);
export type BrakeUnit = z.infer<typeof brakeUnitSchema>;
