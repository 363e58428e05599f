import fc from 'fast-check';
import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { ByteScanner } from './byteScanner.ts';
import { ColumnStore } from './columnStore.ts';
import { QuotedReader } from './quotedReader.ts';
import { readNumber } from './readNumber.ts';
import { RowNotes } from './rowNotes.ts';
import type { RowPlan } from './rowPlan.ts';
import { RunReader } from './runReader.ts';

const encoder = new TextEncoder();

function encode(text: string, encoding: string): Uint8Array {
	if (encoding === 'utf-8') return encoder.encode(text);
	if (encoding === 'utf-8 with mark') return encoder.encode(`\ufeff${text}`);
	if (encoding === 'latin-1') return Uint8Array.from(text, (letter) => letter.charCodeAt(0));
	const little = encoding.includes('le');
	const marked = encoding.includes('mark') ? `\ufeff${text}` : text;
	const bytes = new Uint8Array(marked.length * 2);
	const view = new DataView(bytes.buffer);
	for (let i = 0; i < marked.length; i++) view.setUint16(i * 2, marked.charCodeAt(i), little);
	return bytes;
}

function readInPieces(bytes: Uint8Array, piece: number) {
	const reader = new RunReader({ fileName: 'any.csv' });
	for (let at = 0; at < bytes.length; at += piece) reader.push(bytes.subarray(at, at + piece));
	return reader.end();
}

describe('RunReader', () => {
	const tables = fc.array(
		fc.record({
			stepMs: fc.integer({ min: 10, max: 100 }),
			speed: fc.integer({ min: 0, max: 300_000 }),
			steering: fc.integer({ min: -40_000, max: 40_000 }),
			brake: fc.integer({ min: 0, max: 10_000 })
		}),
		{ minLength: 12, maxLength: 60 }
	);
	const style = fc
		.record({
			delimiter: fc.constantFrom(',', ';', '\t', '|'),
			decimal: fc.constantFrom<'.' | ','>('.', ','),
			encoding: fc.constantFrom(
				'utf-8',
				'utf-8 with mark',
				'latin-1',
				'utf-16le with mark',
				'utf-16be with mark',
				'utf-16le',
				'utf-16be'
			),
			lineEnd: fc.constantFrom('\n', '\r\n', '\r'),
			quoting: fc.constantFrom('none', 'all', 'notes'),
			lastLineEnd: fc.boolean(),
			trailing: fc.boolean(),
			preamble: fc.integer({ min: 0, max: 4 }),
			units: fc.constantFrom('header', 'row'),
			piece: fc.integer({ min: 1, max: 3000 })
		})
		.filter(({ delimiter, decimal, quoting }) => decimal === '.' || delimiter !== ',' || quoting === 'all');

	it('reads the same numbers however a table is written', () => {
		fc.assert(
			fc.property(tables, style, (rows, written) => {
				const quote = (text: string) => (written.quoting === 'all' ? `"${text}"` : text);
				const number = (value: number, digits: number) => value.toFixed(digits).replace('.', written.decimal);
				const end = written.trailing ? written.delimiter : '';
				const line = (cells: string[]) => cells.map(quote).join(written.delimiter) + end;
				const inHeader = written.units === 'header';
				const lines = Array.from(
					{ length: written.preamble },
					(_, i) =>
						['driver', 'circuit', '', 'comment'][i] &&
						`${['driver', 'circuit', '', 'comment'][i]}${written.delimiter}some words`
				);
				lines.push(
					line(
						inHeader
							? ['time [s]', 'speed [km/h]', 'steering [°]', 'brake [%]', 'note']
							: ['time', 'speed', 'steering', 'brake', 'note']
					)
				);
				if (!inHeader) lines.push(line(['s', 'km/h', '°', '%', '']));
				let timeMs = 0;
				const times: number[] = [];
				for (const row of rows) {
					times.push(timeMs / 1000);
					const note = written.quoting === 'notes' ? `"over ""it""${written.delimiter} twice"` : 'x';
					lines.push(
						line([
							number(timeMs / 1000, 3),
							number(row.speed / 1000, 3),
							number(row.steering / 100, 2),
							number(row.brake / 100, 2)
						]) +
							(end === '' ? written.delimiter : '') +
							note
					);
					timeMs += row.stepMs;
				}
				const text = lines.join(written.lineEnd) + (written.lastLineEnd ? written.lineEnd : '');
				const [run] = readInPieces(encode(text, written.encoding), written.piece);
				expect(Array.from(run.timeS)).toEqual(times);
				expect(Array.from(run.columns.speed ?? [])).toEqual(rows.map(({ speed }) => Math.fround(speed / 1000)));
				expect(Array.from(run.columns.steering ?? [])).toEqual(rows.map(({ steering }) => Math.fround(steering / 100)));
				expect(run.fileRow[0]).toBe(written.preamble + (inHeader ? 2 : 3));
			}),
			{ numRuns: 100, seed: 7 }
		);
	});

	it('throws nothing but its own error on any bytes, and ends quickly', () => {
		const started = performance.now();
		const pieces = fc.oneof(
			fc.uint8Array({ maxLength: 600 }),
			fc.string({ unit: 'binary', maxLength: 400 }).map((text) => encoder.encode(text)),
			fc
				.array(
					fc.constantFrom(
						'time (s)',
						'speed',
						'lap',
						',',
						';',
						'"',
						'\n',
						'\r',
						'\t',
						'1.5',
						'0',
						'-',
						'e9',
						'\0',
						'\ufeff',
						'{',
						'<',
						'NaN',
						'12:30:01.5',
						'9e999',
						'ä',
						'|'
					),
					{ maxLength: 300 }
				)
				.map((words) => encoder.encode(words.join('')))
		);
		fc.assert(
			fc.property(pieces, fc.integer({ min: 1, max: 200 }), (bytes, piece) => {
				try {
					const runs = readInPieces(bytes, piece);
					expect(runs.length).toBeGreaterThan(0);
					for (const run of runs) expect(run.timeS.every((time, i) => i === 0 || time > run.timeS[i - 1])).toBe(true);
				} catch (error) {
					if (!(error instanceof KerbnoteError)) throw error;
				}
			}),
			{ numRuns: 1000, seed: 11 }
		);
		expect(performance.now() - started).toBeLessThan(60_000);
	});
});

describe('ByteScanner', () => {
	const cell = fc.oneof(
		fc.double({ noNaN: true, noDefaultInfinity: true }).map(String),
		fc.float({ noNaN: true, noDefaultInfinity: true }).map(String),
		fc.integer().map(String),
		fc
			.tuple(fc.integer({ min: -1e9, max: 1e9 }), fc.integer({ min: 0, max: 9 }))
			.map(([value, digits]) => value.toFixed(digits)),
		fc
			.tuple(fc.bigInt({ min: 0n, max: 10n ** 20n }), fc.integer({ min: 0, max: 25 }))
			.map(([value, places]) => `${value}.${'0'.repeat(places)}7`),
		fc.constantFrom(
			'',
			' ',
			'0',
			'-0',
			'+1.5',
			' 2.5 ',
			'.5',
			'5.',
			'007.10',
			'1e3',
			'-2.5E-4',
			'123456789012345',
			'1234567890123456',
			'0.000000000000001'
		)
	);

	it('reads every cell as PapaParse and Number do', () => {
		fc.assert(
			fc.property(
				fc.array(fc.tuple(cell, cell, cell), { minLength: 1, maxLength: 40 }),
				fc.integer({ min: 1, max: 500 }),
				fc.constantFrom('\n', '\r\n', '\r'),
				(rows, piece, lineEnd) => {
					const text = rows.map((row) => row.join(',')).join(lineEnd);
					const store = new ColumnStore([true, true, true]);
					const scanner = new ByteScanner(plan(), store, new RowNotes());
					const bytes = encoder.encode(text);
					for (let at = 0; at < bytes.length; at += piece)
						expect(scanner.push(bytes.subarray(at, at + piece))).toBeNull();
					scanner.end();
					const { columns, rows: count } = store.finish();
					const expected = Papa.parse<string[]>(text, { delimiter: ',', newline: lineEnd }).data;
					expect(count).toBe(expected.length);
					const wrong = expected.flatMap((cells, row) =>
						cells.filter((value, column) => !Object.is(columns[column][row], value.trim() === '' ? NaN : Number(value)))
					);
					expect(wrong).toEqual([]);
				}
			),
			{ numRuns: 150, seed: 3 }
		);
	});

	it('agrees with the reader of quoted files, row by row', () => {
		fc.assert(
			fc.property(fc.array(fc.tuple(cell, cell, cell), { minLength: 1, maxLength: 20 }), (rows) => {
				const text = `${rows.map((row) => row.join(',')).join('\n')}\n`;
				const [scanned, parsed] = [new ColumnStore([true, true, true]), new ColumnStore([true, true, true])];
				const scanner = new ByteScanner(plan(), scanned, new RowNotes());
				scanner.push(encoder.encode(text));
				scanner.end();
				const reader = new QuotedReader(plan(), parsed, new RowNotes(), 1);
				reader.push(encoder.encode(text));
				reader.end();
				expect(scanned.finish()).toEqual(parsed.finish());
			}),
			{ numRuns: 100, seed: 5 }
		);
	});

	it('hands over at the first quoted cell, with the line that it stands in', () => {
		const scanner = new ByteScanner(plan(), new ColumnStore([true, true, true]), new RowNotes());
		const rest = scanner.push(encoder.encode('1,2,3\n4,5,6\n7,"8",9\n10,11,12\n'));
		expect(new TextDecoder().decode(rest ?? new Uint8Array())).toBe('7,"8",9\n10,11,12\n');
		expect(scanner.line).toBe(3);
	});

	function plan(): RowPlan {
		return {
			delimiter: ',',
			decimal: '.',
			width: 3,
			slotOf: Int16Array.of(0, 1, 2),
			readers: Array.from({ length: 3 }, () => (text: string) => readNumber(text, '.')),
			plain: Uint8Array.of(1, 1, 1),
			firstDataLine: 1,
			decoder: 'utf-8'
		};
	}
});
