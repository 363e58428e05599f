import type { Channel } from '../schemas/channels.ts';

/** The unit that a channel has inside, where it has only one. */
const HOUSE_UNIT: Partial<Record<Channel, string>> = {
	time: 's',
	lapTime: 's',
	lastLapTime: 's',
	distance: 'm',
	lapDistance: 'm',
	positionX: 'm',
	positionY: 'm',
	altitude: 'm',
	speed: 'km/h',
	throttle: '%',
	steering: '°',
	heading: '°',
	latitude: '°',
	longitude: '°',
	engineSpeed: '1/min',
	accLong: 'm/s²',
	accLat: 'm/s²',
	yawRate: 'rad/s'
};

/** How units of a file are written on a page, where not as they stand. */
const SPELLED: Record<string, string> = {
	'0..1': '0–1',
	deg: '°',
	'deg/s': '°/s',
	'deg min': '° and minutes',
	'1e-7 deg': '° · 10⁷',
	switch: 'on or off',
	'–': ''
};

/** A unit as a page writes it: "0–1" for "0..1". */
export function spelledUnit(unit: string): string {
	return SPELLED[unit] ?? unit;
}

const RATIO = new Set(['%', '0..1', '‰']);
const PRESSURE = new Set(['bar', 'mbar', 'kPa', 'hPa', 'Pa', 'MPa', 'psi']);
const FORCE = new Set(['N', 'kN', 'daN', 'kgf', 'lbf']);
const ROTATION = new Set(['rad/s', 'deg/s', '1/min']);
/** Stand for no unit: nothing was converted. */
const COUNTED = new Set(['', 'raw counts', 'switch', '–']);

/** The unit that a column has after reading; "" where it has none. A brake pressure stays a pressure. */
export function unitAfterReading(channel: Channel, fileUnit: string): string {
	if (channel === 'brake' || channel === 'brakeRear') {
		if (RATIO.has(fileUnit)) return '%';
		if (PRESSURE.has(fileUnit)) return 'bar';
		return FORCE.has(fileUnit) ? 'N' : '';
	}
	if (channel.startsWith('wheelSpeed')) return ROTATION.has(fileUnit) ? 'rad/s' : COUNTED.has(fileUnit) ? '' : 'km/h';
	const bare = COUNTED.has(fileUnit) && (channel === 'throttle' || channel === 'steering');
	return bare ? '' : (HOUSE_UNIT[channel] ?? '');
}

/** What a column was measured in and what it became: "m/s → km/h"; one unit where nothing was converted. */
export function unitText(channel: Channel, fileUnit: string): string {
	const written = spelledUnit(fileUnit);
	const after = unitAfterReading(channel, fileUnit);
	return after === '' || written === '' || written === after ? written || after : `${written} → ${after}`;
}
