import type { ErrorCode } from '../../schemas/codes.ts';
import { encodeText } from './dialect.ts';
import { TIME, THROTTLE, BRAKE, ALL, without, file, lines, fromLines, samples } from './writtenColumns.ts';
import type { RefusedCase } from './writtenColumns.ts';

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
