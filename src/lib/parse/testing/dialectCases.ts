import { writeText } from './dialect.ts';
import {
	TIME,
	LAP,
	DISTANCE,
	SPEED,
	BRAKE,
	STEERING,
	ALL,
	column,
	without,
	swap,
	bare,
	file,
	lines,
	fromLines,
	accepted,
	samples
} from './writtenColumns.ts';
import type { AcceptedCase } from './writtenColumns.ts';

export const dialects: AcceptedCase[] = [
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
