import type { Channel } from '../../schemas/channels.ts';
import type { ErrorCode, WarningCode } from '../../schemas/codes.ts';
import { LANGUAGES } from './languages.ts';
import { encodeText, writeFile, writeText } from './dialect.ts';
import type { Dialect, WrittenColumn } from './dialect.ts';
import { testRecording } from './recording.ts';
import type { Sample } from './recording.ts';

/** A file, and what must come out of it. */
export interface AcceptedCase {
	name: string;
	bytes: Uint8Array;
	/** units as understood, by channel */
	units?: Partial<Record<Channel, string>>;
	warnings?: readonly WarningCode[];
	/** channels that must be there beside time */
	channels?: readonly Channel[];
	/** complete laps that must be found; 3 unless given; null: not looked at */
	laps?: number | null;
	runs?: number;
	/** the time of every sample must be the recording's */
	sameTime?: boolean;
	/** km/h that the speed may differ by */
	speedWithin?: number;
}

export interface RefusedCase {
	name: string;
	bytes: Uint8Array;
	code: ErrorCode;
	row?: number;
}

const samples = testRecording();

export const TIME: WrittenColumn = { header: 'time (s)', unit: 's', cell: ({ timeS }) => timeS };
export const LAP: WrittenColumn = { header: 'lap', cell: ({ lap }) => lap };
export const DISTANCE: WrittenColumn = { header: 'distance (m)', unit: 'm', cell: ({ distanceM }) => distanceM };
export const SPEED: WrittenColumn = { header: 'speed (km/h)', unit: 'km/h', cell: ({ speedKmh }) => speedKmh };
export const THROTTLE: WrittenColumn = { header: 'throttle (%)', unit: '%', cell: ({ throttlePct }) => throttlePct };
export const BRAKE: WrittenColumn = { header: 'brake (%)', unit: '%', cell: ({ brakePct }) => brakePct };
export const STEERING: WrittenColumn = {
	header: 'steering (deg)',
	unit: 'deg',
	cell: ({ steeringDeg }) => steeringDeg
};
const ALL = [TIME, LAP, DISTANCE, SPEED, THROTTLE, BRAKE, STEERING];

const column = (header: string, cell: WrittenColumn['cell'], unit?: string): WrittenColumn => ({ header, cell, unit });
const round = (value: number, places: number) => Number(value.toFixed(places));
const without = (...gone: WrittenColumn[]) => ALL.filter((one) => !gone.includes(one));
const swap = (old: WrittenColumn, fresh: WrittenColumn) => ALL.map((one) => (one === old ? fresh : one));
const bare = ALL.map((one) => ({ ...one, header: one.header.replace(/ \(.*/, '') }));
const file = (columns: readonly WrittenColumn[], dialect?: Dialect, rows: readonly Sample[] = samples) =>
	writeFile(columns, rows, dialect);
const lines = () => writeText(ALL, samples).trimEnd().split('\n');
const fromLines = (text: readonly string[]) => encodeText(`${text.join('\n')}\n`);
const accepted = (name: string, bytes: Uint8Array, more: Partial<AcceptedCase> = {}): AcceptedCase => ({
	name,
	bytes,
	sameTime: true,
	speedWithin: 0.01,
	channels: ['speed'],
	...more
});

const two = (value: number) => String(value).padStart(2, '0');
function clockText(seconds: number, sign = '.', hours = true): string {
	const ms = Math.round(seconds * 1000);
	const [h, m, s, rest] = [
		Math.floor(ms / 3_600_000) % 24,
		Math.floor(ms / 60_000) % 60,
		Math.floor(ms / 1000) % 60,
		ms % 1000
	];
	return `${hours ? `${two(h)}:` : ''}${two(m)}:${two(s)}${sign}${String(rest).padStart(3, '0')}`;
}
const EPOCH_S = 1_779_033_851;
const iso = (seconds: number, zone: string) =>
	`${new Date((EPOCH_S + seconds) * 1000).toISOString().slice(0, 23)}${zone}`;
/** 17 May 2026, 10:00, as a spreadsheet counts days. */
const SERIAL = 46_159 + 10 / 24;

const dialects: AcceptedCase[] = [
	...(['utf-8', 'utf-8 bom', 'utf-16le', 'utf-16be', 'utf-16le bom', 'utf-16be bom', 'latin-1'] as const).map(
		(encoding) =>
			accepted(`encoding ${encoding}`, file(swap(STEERING, column('steering (°)', STEERING.cell)), { encoding }), {
				units: { steering: 'deg' },
				channels: ['steering', 'brake']
			})
	),
	...([',', ';', '\t', '|', ' ', '    '] as const).map((delimiter) =>
		accepted(`delimiter ${JSON.stringify(delimiter)}`, file(bare, { delimiter }), {
			channels: ['brake', 'throttle', 'steering']
		})
	),
	...([';', '\t', '|', '  '] as const).map((delimiter) =>
		accepted(`decimal comma with ${JSON.stringify(delimiter)}`, file(ALL, { delimiter, decimal: ',' }))
	),
	accepted('decimal comma in quotes between commas', file(ALL, { decimal: ',', quote: true })),
	accepted(
		'spaces before and between, units in brackets',
		fromLines(
			writeText(ALL, samples, { delimiter: '   ' })
				.trimEnd()
				.split('\n')
				.map((line) => `   ${line}  `)
		)
	),
	...(['\r', '\r\n', '\n\r\n'] as const).map((lineEnd) =>
		accepted(`line end ${JSON.stringify(lineEnd)}`, file(ALL, { lineEnd }))
	),
	accepted('a first line that names the delimiter', file(ALL, { delimiter: ';', preamble: ['sep=;'] })),
	accepted(
		'comment lines above',
		file(ALL, { preamble: ['# written by a logger', '# car: 7', '#', '// end of notes'] })
	),
	accepted('names behind a comment sign', file([{ ...TIME, header: '# time (s)' }, ...without(TIME)])),
	accepted('names behind a comment sign, spaces', file(bare, { delimiter: ' ', preamble: ['# one'] })),
	accepted(
		'pairs of other widths above',
		file(ALL, { preamble: ['driver,Nobody', 'sample rate,10,Hz', 'notes,a,b,c,d,e,f,g,h', '', 'x'] })
	),
	accepted(
		'pairs with colons above',
		file(ALL, { delimiter: ';', preamble: ['Driver: Nobody', 'Date: 2026-05-17 10:00'] })
	),
	accepted(
		'row of units',
		file(
			bare.map((one, i) => ({ ...one, unit: ALL[i].unit })),
			{ unitRow: true }
		),
		{ units: { speed: 'km/h', steering: 'deg' } }
	),
	accepted(
		'units in brackets in a row',
		file(
			bare.map((one, i) => ({ ...one, unit: ALL[i].unit ? `[${ALL[i].unit}]` : '' })),
			{ unitRow: true }
		),
		{ units: { speed: 'km/h' } }
	),
	accepted(
		'names over two rows',
		fromLines([
			'wheel speed,wheel speed,,,brake',
			'fl,fr,time,speed,pressure',
			...samples.map((s) => [s.speedKmh, s.speedKmh, s.timeS, s.speedKmh, s.brakePct].join(','))
		]),
		{ laps: null, channels: ['wheelSpeedFl', 'wheelSpeedFr', 'brake'] }
	),
	accepted(
		'header again in mid-file',
		fromLines(lines().flatMap((line, i, all) => (i === 400 ? [all[0], line] : [line])))
	),
	accepted('blank lines between rows', fromLines(lines().flatMap((line, i) => (i % 50 === 7 ? [line, ''] : [line])))),
	accepted('rows of empty cells', fromLines(lines().flatMap((line, i) => (i % 90 === 7 ? [line, ',,,,,,'] : [line])))),
	accepted(
		'short rows',
		fromLines(lines().map((line, i) => (i % 60 === 9 ? line.split(',').slice(0, 5).join(',') : line))),
		{ warnings: ['short_row'] }
	),
	accepted('long rows', fromLines(lines().map((line, i) => (i % 60 === 9 ? `${line},77` : line))), {
		warnings: ['long_row']
	}),
	accepted(
		'footer of statistics',
		fromLines([...lines(), 'max,,,99.9,100,100,120', 'mean,,,60,40,20,3', '', 'end of export']),
		{ warnings: ['footer_ignored'] }
	),
	accepted(
		'notes with line breaks in quotes',
		file([...ALL, column('note', (_, i) => (i % 100 === 3 ? 'one\ntwo, "three"' : ''))])
	),
	accepted(
		'missing values',
		file(
			swap(
				BRAKE,
				column(
					'brake (%)',
					({ brakePct }, i) => ['NaN', '-', '--', 'n/a', '#N/A', 'Inf', 'null', ''][i % 40] ?? brakePct
				)
			)
		),
		{ channels: ['brake'] }
	),
	...(['.', ' ', '\u00a0', '\u202f', "'", '’'] as const).map((sign) =>
		accepted(
			`thousands ${JSON.stringify(sign)}`,
			file(
				swap(
					DISTANCE,
					column('distance (m)', ({ distanceM }) =>
						distanceM
							.toFixed(2)
							.replace('.', ',')
							.replace(/(\d)(?=\d{3},)/, `$1${sign}`)
					)
				),
				{ delimiter: ';', decimal: ',' }
			),
			{ channels: ['distance'] }
		)
	),
	accepted('empty and repeated header cells', file([column('', (_, i) => i), ...ALL, column('', () => 7), SPEED]), {
		warnings: ['duplicate_column']
	}),
	accepted(
		'a thousand columns',
		file([...ALL, ...Array.from({ length: 993 }, (_, i) => column(`aux ${i}`, () => i))], {}, samples)
	),
	accepted('three columns', file([TIME, LAP, SPEED]))
];

const quantities: AcceptedCase[] = [
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

const times: AcceptedCase[] = [
	...(
		[
			['epoch s', 1],
			['epoch ms', 1e3],
			['epoch us', 1e6]
		] as const
	).map(([name, perSecond]) =>
		accepted(
			`time as ${name}`,
			file(
				swap(
					TIME,
					column('time', ({ timeS }) =>
						perSecond === 1
							? (EPOCH_S + timeS).toFixed(3)
							: String(Math.round((EPOCH_S + timeS) * 1000) * (perSecond / 1e3))
					)
				)
			)
		)
	),
	accepted(
		'time as epoch ns',
		file(
			swap(
				TIME,
				column('timestamp', ({ timeS }) => `${Math.round((EPOCH_S + timeS) * 1000)}000000`)
			)
		)
	),
	...(
		[
			['time (ms)', 1e3],
			['time [us]', 1e6],
			['time_ns', 1e9],
			['time (min)', 1 / 60]
		] as const
	).map(([header, perSecond]) =>
		accepted(
			`time as ${header}`,
			file(
				swap(
					TIME,
					column(header, ({ timeS }) => round(timeS * perSecond, 7))
				)
			)
		)
	),
	accepted(
		'time in ms without a unit',
		file(
			swap(
				TIME,
				column('time', ({ timeS }) => Math.round(timeS * 1000))
			)
		)
	),
	...['Z', '+02:00', '-0500', ''].map((zone) =>
		accepted(
			`time ISO 8601 with zone "${zone}"`,
			file(
				swap(
					TIME,
					column('timestamp', ({ timeS }) => iso(timeS, zone))
				)
			)
		)
	),
	accepted(
		'time with a space after the date',
		file(
			swap(
				TIME,
				column('date time', ({ timeS }) => iso(timeS, '').replace('T', ' '))
			)
		)
	),
	accepted(
		'time of day',
		file(
			swap(
				TIME,
				column('time', ({ timeS }) => clockText(36_000 + timeS))
			)
		)
	),
	accepted(
		'time of day with a comma',
		file(
			swap(
				TIME,
				column('Zeit', ({ timeS }) => clockText(36_000 + timeS, ','))
			),
			{ delimiter: ';', decimal: ',' }
		)
	),
	accepted(
		'time of day that passes midnight',
		file(
			swap(
				TIME,
				column('time', ({ timeS }) => clockText(86_390 + timeS))
			)
		)
	),
	accepted(
		'stop-watch time',
		file(
			swap(
				TIME,
				column('time', ({ timeS }) => clockText(timeS, '.', false))
			)
		)
	),
	accepted(
		'date and time of day in two columns',
		file([
			column('date', () => '17.05.2026'),
			column('time', ({ timeS }) => clockText(36_000 + timeS)),
			...without(TIME)
		])
	),
	accepted(
		'days as a spreadsheet counts them',
		file(
			swap(
				TIME,
				column('time', ({ timeS }) => (SERIAL + timeS / 86_400).toFixed(9))
			)
		),
		{}
	),
	accepted(
		'more than one time column',
		file([column('lap time (s)', ({ lapDistanceM }) => round(lapDistanceM / 16, 3)), ...ALL])
	),
	accepted(
		'time with jitter',
		file(
			swap(
				TIME,
				column('time (s)', ({ timeS }, i) => round(timeS + (i % 3) * 0.004, 3))
			)
		),
		{ sameTime: false }
	),
	accepted('repeated rows', fromLines(lines().flatMap((line, i) => (i > 0 && i % 80 === 5 ? [line, line] : [line]))), {
		warnings: ['duplicate_rows']
	}),
	accepted('rows written twice', fromLines([...lines().slice(0, 300), ...lines().slice(280)]), {
		warnings: ['overlap_removed']
	}),
	accepted('drop-out of two seconds', fromLines(lines().filter((_, i) => i < 500 || i >= 520)), { sameTime: false }),
	accepted(
		'a second run after a pause',
		file(ALL, {}, [...samples, ...samples.map((s) => ({ ...s, timeS: s.timeS + 2000 }))]),
		{ sameTime: false, runs: 2, warnings: ['more_runs'] }
	),
	accepted(
		'a second run whose time starts anew',
		file(ALL, {}, [...samples, ...samples.map((s) => ({ ...s, throttlePct: round(s.throttlePct / 2, 1) }))]),
		{
			sameTime: false,
			runs: 2,
			warnings: ['more_runs']
		}
	)
];

const cells: AcceptedCase[] = [
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

const lapSources: AcceptedCase[] = [
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

const languages: AcceptedCase[] = LANGUAGES.map(({ name, encoding, delimiter, decimal, headers }) => {
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

export const ACCEPTED_CASES: readonly AcceptedCase[] = [
	...dialects,
	...quantities,
	...times,
	...cells,
	...lapSources,
	...languages
];

const text = (content: string) => encodeText(content);
const refusedCase = (name: string, bytes: Uint8Array, code: ErrorCode, row?: number): RefusedCase => ({
	name,
	bytes,
	code,
	row
});

export const REFUSED_CASES: readonly RefusedCase[] = [
	refusedCase('nothing', new Uint8Array(), 'empty_file'),
	refusedCase('a byte order mark alone', Uint8Array.of(0xef, 0xbb, 0xbf), 'empty_file'),
	refusedCase('the mark of UTF-16 alone', Uint8Array.of(0xff, 0xfe), 'empty_file'),
	refusedCase('spaces and line ends', text(' \n\t\r\n  \n'), 'empty_file'),
	refusedCase('names alone', text('time,speed,brake\n'), 'no_data_rows', 1),
	refusedCase('names and units alone', text('time,speed,brake\ns,km/h,%\n'), 'no_data_rows', 1),
	refusedCase('three rows', fromLines(lines().slice(0, 4)), 'too_few_samples', 1),
	refusedCase(
		'binary',
		Uint8Array.from({ length: 4000 }, (_, i) => (i * 7919) % 251),
		'not_text'
	),
	refusedCase('PNG', Uint8Array.of(0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a, 0, 0, 0, 13), 'not_text'),
	refusedCase('JPEG', Uint8Array.of(0xff, 0xd8, 0xff, 0xe0, 0, 16, 0x4a, 0x46, 0x49, 0x46), 'not_text'),
	refusedCase('PDF', text('%PDF-1.7\n1 0 obj\n<< >>\nendobj\n'), 'not_text'),
	refusedCase('zip', Uint8Array.of(0x50, 0x4b, 3, 4, 20, 0, 1, 0), 'compressed_file'),
	refusedCase('gzip', Uint8Array.of(0x1f, 0x8b, 8, 0, 0, 0), 'compressed_file'),
	refusedCase('web page', text('<!DOCTYPE html>\n<html><body>502 Bad Gateway</body></html>\n'), 'not_csv_html'),
	refusedCase(
		'web page with spaces before',
		text('\n\n  <html lang="en">\n<table><tr><td>1</td><td>2</td></tr></table></html>'),
		'not_csv_html'
	),
	refusedCase('XHTML', text('<?xml version="1.0"?>\n<!DOCTYPE html>\n<html xmlns="x"></html>'), 'not_csv_html'),
	refusedCase('XML', text('<?xml version="1.0"?>\n<run><sample t="0" v="1"/></run>'), 'not_csv'),
	refusedCase('JSON', text('[{"time":0,"speed":50},{"time":0.1,"speed":51}]'), 'not_csv'),
	refusedCase('JSON in lines', text('{"time":0,"speed":50}\n{"time":0.1,"speed":51}\n'), 'not_csv'),
	refusedCase('prose', text('Dear coach,\nit was a fine day, and the car went well.\nYours\n'), 'not_csv'),
	refusedCase('an endless line', text(`time,speed\n0,1\n${'7'.repeat(300_000)}`), 'line_too_long'),
	refusedCase('an endless first line', text('a'.repeat(300_000)), 'line_too_long', 1),
	refusedCase(
		'1,001 columns',
		text(
			`${Array.from({ length: 1001 }, (_, i) => `c${i}`).join(',')}\n${`${Array.from({ length: 1001 }, (_, i) => i).join(',')}\n`.repeat(12)}`
		),
		'too_many_columns'
	),
	refusedCase(
		'3,000 columns',
		text(
			`time,speed,${Array.from({ length: 3000 }, (_, i) => `c${i}`).join(',')}\n${`0,1,${Array.from({ length: 3000 }, (_, i) => i).join(',')}\n`.repeat(12)}`
		),
		'too_many_columns'
	),
	refusedCase('words in every cell', text(`time,speed,brake\n${'soon,fast,hard\n'.repeat(20)}`), 'no_data_rows'),
	refusedCase('no time', file(without(TIME)), 'missing_time', 1),
	refusedCase('no speed', file([TIME, THROTTLE, BRAKE]), 'missing_speed', 1),
	refusedCase(
		'standing car',
		file(
			ALL,
			{},
			samples.map((s) => ({ ...s, speedKmh: 0, distanceM: 0, lapDistanceM: 0, lap: 0 }))
		),
		'no_movement'
	),
	refusedCase(
		'standing time',
		file(
			ALL,
			{},
			samples.map((s) => ({ ...s, timeS: 12.5 }))
		),
		'time_not_increasing'
	),
	refusedCase('time backwards', file(ALL, {}, [...samples].reverse()), 'time_not_increasing'),
	refusedCase(
		'a quote that never closes',
		fromLines(lines().map((line, i) => (i === 9 ? `"${line}` : line))),
		'unclosed_quote',
		10
	),
	refusedCase(
		'UTF-32',
		Uint8Array.from([0xff, 0xfe, 0, 0, ...[...'time,speed\n'].flatMap((letter) => [letter.charCodeAt(0), 0, 0, 0])]),
		'unknown_encoding'
	),
	refusedCase('no names', file(ALL, { header: false }), 'needs_answer', 1),
	refusedCase(
		'names that say nothing',
		file(ALL.map((one, i) => ({ ...one, header: `qx${'abcdefg'[i]}` }))),
		'needs_answer',
		1
	),
	refusedCase('no names and nothing like time', text('3,7\n1,9\n4,4\n2,2\n9,1\n0,3\n'.repeat(5)), 'no_header', 1)
];
