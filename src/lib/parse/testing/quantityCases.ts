import {
	TIME,
	LAP,
	DISTANCE,
	SPEED,
	THROTTLE,
	BRAKE,
	STEERING,
	ALL,
	column,
	round,
	swap,
	file,
	accepted
} from './writtenColumns.ts';
import type { AcceptedCase } from './writtenColumns.ts';

export const quantities: AcceptedCase[] = [
	...(
		[
			['speed (mph)', 1.609344, 'mph'],
			['speed [m/s]', 3.6, 'm/s'],
			['speed_kn', 1.852, 'kn'],
			['speed/kmh', 1, 'km/h'],
			['Speed_kmh', 1, 'km/h'],
			['speed, ft/s', 1.09728, 'ft/s']
		] as const
	).map(([header, factor, unit]) =>
		accepted(
			`speed as ${header}`,
			file(
				swap(
					SPEED,
					column(header, ({ speedKmh }) => round(speedKmh / factor, 4))
				)
			),
			{ units: { speed: unit } }
		)
	),
	...(
		[
			['speed', 3.6, 'm/s'],
			['speed', 1.609344, 'mph'],
			['speed', 1.852, 'kn'],
			['speed', 1, 'km/h']
		] as const
	).map(([header, factor, unit]) =>
		accepted(
			`speed without a unit in ${unit}`,
			file(
				swap(
					SPEED,
					column(header, ({ speedKmh }) => round(speedKmh / factor, 3))
				)
			),
			{ units: { speed: unit }, speedWithin: 0.02 }
		)
	),
	...(
		[
			['brake (bar)', 0.8, 'bar'],
			['brake pressure (kPa)', 80, 'kPa'],
			['brake pressure [psi]', 11.6, 'psi'],
			['brake_MPa', 0.08, 'MPa'],
			['brake force (N)', 9, 'N'],
			['brake', 0.01, '0..1'],
			['brake raw', 40.95, 'raw counts']
		] as const
	).map(([header, factor, unit]) =>
		accepted(
			`brake as ${header}`,
			file(
				swap(
					BRAKE,
					column(header, ({ brakePct }) => round(brakePct * factor, 4))
				)
			),
			{ units: { brake: unit } }
		)
	),
	accepted(
		'throttle inverted',
		file(
			swap(
				THROTTLE,
				column('throttle (%)', ({ throttlePct }) => round(100 - throttlePct, 1))
			)
		),
		{ channels: ['throttle'] }
	),
	accepted(
		'steering the other way',
		file(
			swap(
				STEERING,
				column('steering (deg)', ({ steeringDeg }) => -steeringDeg)
			)
		),
		{ channels: ['steering'] }
	),
	accepted(
		'steering in radians',
		file(
			swap(
				STEERING,
				column('steering angle (rad)', ({ steeringDeg }) => round((steeringDeg * Math.PI) / 180, 4))
			)
		),
		{ units: { steering: 'rad' } }
	),
	...(
		[
			['distance (km)', 1000, 'km'],
			['distance (mi)', 1609.344, 'mi'],
			['distance (ft)', 0.3048, 'ft']
		] as const
	).map(([header, factor, unit]) =>
		accepted(
			`distance as ${header}`,
			file(
				swap(
					DISTANCE,
					column(header, ({ distanceM }) => round(distanceM / factor, 6))
				)
			),
			{ units: { distance: unit } }
		)
	)
];

export const cells: AcceptedCase[] = [
	accepted(
		'units behind every number',
		file([
			TIME,
			LAP,
			column('speed', ({ speedKmh }) => `${round(speedKmh / 1.609344, 4)} mph`),
			column('brake', ({ brakePct }) => `${brakePct} %`)
		]),
		{ units: { speed: 'mph', brake: '%' } }
	),
	accepted(
		'numbers in scientific notation',
		file(
			swap(
				SPEED,
				column('speed (km/h)', ({ speedKmh }) => speedKmh.toExponential(5))
			)
		)
	),
	accepted(
		'typographic minus',
		file(
			swap(
				STEERING,
				column('steering (deg)', ({ steeringDeg }) => String(steeringDeg).replace('-', '\u2212'))
			)
		),
		{ channels: ['steering'] }
	),
	accepted(
		'a brake that is on or off',
		file(
			swap(
				BRAKE,
				column('brake', ({ brakePct }) => (brakePct > 5 ? 'on' : 'off'))
			)
		),
		{ units: { brake: 'switch' } }
	),
	accepted('gear as words', file([...ALL, column('gear', ({ gear }, i) => (i < 3 ? 'N' : gear))]), {
		channels: ['gear']
	})
];
