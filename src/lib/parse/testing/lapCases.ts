import { LANGUAGES } from './languages.ts';
import type { WrittenColumn } from './dialect.ts';
import { TIME, LAP, SPEED, THROTTLE, BRAKE, column, swap, file, accepted, samples } from './writtenColumns.ts';
import type { AcceptedCase } from './writtenColumns.ts';

export const lapSources: AcceptedCase[] = [
	accepted(
		'lap counter from 1',
		file(
			swap(
				LAP,
				column('lap number', ({ lap }) => lap + 1)
			)
		)
	),
	accepted(
		'lap as words',
		file(
			swap(
				LAP,
				column('lap', ({ lap }) => (lap === 0 ? 'Out' : `Lap ${lap}`))
			)
		)
	),
	accepted(
		'lap counter that stays the same, distance from the line',
		file([
			TIME,
			column('lap', () => 0),
			column('lap distance (m)', ({ lapDistanceM }) => lapDistanceM),
			SPEED,
			THROTTLE,
			BRAKE
		])
	),
	accepted(
		'laps counted down',
		file(
			swap(
				LAP,
				column('laps', ({ lap }) => 20 - lap)
			)
		)
	),
	accepted(
		'beacon pulses',
		file(
			swap(
				LAP,
				column('beacon', ({ lap }, i) => (i > 0 && samples[i - 1].lap !== lap ? 1 : 0))
			)
		)
	),
	accepted(
		'distance from the line',
		file([TIME, column('distance (m)', ({ lapDistanceM }) => lapDistanceM), SPEED, BRAKE])
	),
	accepted(
		'positions alone',
		file([TIME, column('latitude', (s) => s.latitude), column('longitude', (s) => s.longitude)]),
		{ channels: ['latitude'], laps: null }
	),
	accepted(
		'positions in ten-millionths',
		file([
			TIME,
			SPEED,
			column('lat', (s) => Math.round(s.latitude * 1e7)),
			column('lon', (s) => Math.round(s.longitude * 1e7))
		]),
		{ channels: ['latitude', 'longitude'], laps: null }
	),
	accepted(
		'positions in degrees and minutes',
		file([
			TIME,
			SPEED,
			column('Latitude', (s) => `N ${Math.floor(s.latitude)} ${((s.latitude % 1) * 60).toFixed(5)}`),
			column('Longitude', (s) => `E ${Math.floor(s.longitude)} ${((s.longitude % 1) * 60).toFixed(5)}`)
		]),
		{ channels: ['latitude', 'longitude'], laps: null }
	),
	accepted(
		'positions in degrees and minutes run together',
		file([
			TIME,
			SPEED,
			column('latitude', (s) => (Math.floor(s.latitude) * 100 + (s.latitude % 1) * 60).toFixed(5)),
			column('N/S', () => 'N'),
			column('longitude', (s) => (Math.floor(s.longitude) * 100 + (s.longitude % 1) * 60).toFixed(5)),
			column('E/W', () => 'E')
		]),
		{ channels: ['latitude', 'longitude'], laps: null }
	)
];

export const languages: AcceptedCase[] = LANGUAGES.map(({ name, encoding, delimiter, decimal, headers }) => {
	const cells: WrittenColumn['cell'][] = [
		(s) => s.timeS,
		(s) => s.lap,
		(s) => s.distanceM,
		(s) => s.speedKmh,
		(s) => s.throttlePct,
		(s) => s.brakePct,
		(s) => s.steeringDeg,
		(s) => s.gear,
		(s) => 4000 + s.gear * 300,
		(s) => s.latitude,
		(s) => s.longitude,
		(s) => s.accLatG,
		(s) => s.accLongG
	];
	return accepted(
		`header in ${name}`,
		file(
			headers.map((header, i) => column(header, cells[i])),
			{ encoding, delimiter, decimal }
		),
		{
			channels: [
				'lap',
				'distance',
				'speed',
				'throttle',
				'brake',
				'steering',
				'gear',
				'engineSpeed',
				'latitude',
				'longitude',
				'accLat',
				'accLong'
			],
			units: { speed: 'km/h', accLat: 'g' }
		}
	);
});
