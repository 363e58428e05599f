import { readFileSync, readdirSync } from 'node:fs';
import { resolve } from 'node:path';
import { gunzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import { RunReader } from './runReader.ts';
import { readRun } from './readRun.ts';
import type { RawRun } from './rawRun.ts';

const folder = resolve('fixtures/import');
const unpack = (name: string): Uint8Array => gunzipSync(readFileSync(resolve(folder, name)));

/** What must come out of each file; the index was written with the files, before this reader. */
const indexSchema = z.object({
	files: z.array(
		z.object({
			file: z.string(),
			expected: z.object({
				action: z.enum(['accept', 'reject']),
				error: z.string().optional(),
				samples: z.number().optional(),
				units: z.record(z.string(), z.string()).optional(),
				mapping: z.union([z.string(), z.record(z.string(), z.string())]).optional(),
				delimiter: z.string().optional(),
				decimal: z.string().optional(),
				encoding: z.string().optional(),
				header_row: z.number().optional(),
				metadata: z.record(z.string(), z.string()).optional(),
				first_time_s: z.number().optional(),
				duplicates: z.number().optional(),
				overlap_rows: z.number().optional(),
				bad_rows: z.number().optional(),
				footer_rows: z.number().optional()
			})
		})
	)
});
const index = indexSchema.parse(JSON.parse(new TextDecoder().decode(unpack('index.json.gz'))));

function readInPieces(bytes: Uint8Array, pieceBytes: number): RawRun[] {
	const reader = new RunReader({ fileName: 'file.csv' });
	for (let at = 0; at < bytes.length; at += pieceBytes) reader.push(bytes.subarray(at, at + pieceBytes));
	return reader.end();
}

/** The channel that carries a quantity of the index: distances and times that restart with each lap are lap channels. */
const channelsOf = (quantity: string): string[] =>
	({ distance: ['distance', 'lapDistance'], time: ['time', 'lapTime'] })[quantity] ?? [quantity];

describe('readRun on files as people have them', () => {
	it('has an expectation for every file of the folder', () => {
		const files = readdirSync(folder).filter((name) => name.endsWith('.csv.gz'));
		expect(index.files.map(({ file }) => `${file}.gz`).sort()).toEqual(files.sort());
	});

	const accepted = index.files.filter(({ expected }) => expected.action === 'accept');
	it.each(accepted)('reads $file', ({ file, expected }) => {
		const [run] = readInPieces(unpack(`${file}.gz`), 5003);
		const { source } = run;
		expect(run.timeS.length).toBe(expected.samples);
		expect(source.rows).toBe(expected.samples);
		expect(run.timeS[0]).toBe(0);
		expect(run.timeS.every((time, i) => i === 0 || time > run.timeS[i - 1])).toBe(true);
		for (const [quantity, unit] of Object.entries(expected.units ?? {})) {
			const column = source.columns.find(({ channel }) => channel !== null && channelsOf(quantity).includes(channel));
			// The file without a speed, or with positions alone, has fewer columns than the base.
			if (column && quantity !== 'time') expect(column.unit, quantity).toBe(unit);
		}
		if (typeof expected.mapping === 'object') {
			for (const [quantity, header] of Object.entries(expected.mapping)) {
				expect(channelsOf(quantity), header).toContain(
					source.columns.find((column) => column.header === header)?.channel
				);
			}
		}
		if (expected.delimiter) expect(source.delimiter).toBe(expected.delimiter);
		if (expected.decimal) expect(source.decimal).toBe(expected.decimal);
		if (expected.encoding) expect(source.encoding).toBe(expected.encoding);
		if (expected.header_row) expect(source.headerRow).toBe(expected.header_row);
		if (expected.metadata) expect(source.metadata).toMatchObject(expected.metadata);
		const counted = (code: string) =>
			Number(/\d+/.exec(source.warnings.find((warning) => warning.code === code)?.message ?? '')?.[0]);
		if (expected.duplicates) expect(counted('duplicate_rows')).toBe(expected.duplicates);
		if (expected.overlap_rows) expect(counted('overlap_removed')).toBe(expected.overlap_rows);
		if (expected.bad_rows) expect(counted('short_row')).toBe(expected.bad_rows);
		if (expected.footer_rows) expect(counted('footer_ignored')).toBe(expected.footer_rows);
	});

	const refused = index.files.filter(({ expected }) => expected.action === 'reject');
	it.each(refused)('refuses $file with $expected.error', ({ file, expected }) => {
		const error = refusal(unpack(`${file}.gz`));
		expect(error.code).toBe(expected.error);
		expect(error.message).not.toMatch(/[.!\n]$/);
		expect(error.remedy.length).toBeGreaterThan(10);
	});

	it('reads every spelling of the recording as the same run', () => {
		const [plain] = readInPieces(unpack('plain.csv.gz'), 1 << 20);
		const same = [
			'delim_semicolon',
			'delim_pipe',
			'decimal_comma_semicolon',
			'utf8_bom',
			'utf16be_bom',
			'latin1_degree',
			'eol_crlf',
			'eol_mixed',
			'preamble',
			'unit_row',
			'units_brackets',
			'quoted_fields',
			'single_quotes_spaces',
			'trailing_delimiter',
			'footer',
			'duplicate_timestamps',
			'time_backwards',
			'duplicate_columns',
			'column_order',
			'language_de',
			'language_fr',
			'language_ja_sjis',
			'null_bytes',
			'header_emoji_rtl',
			'script_in_header',
			'brake_on_off',
			'time_hms',
			'time_epoch_ms',
			'time_iso8601_offset',
			'time_resets_each_lap'
		];
		for (const name of same) {
			const [run] = readInPieces(unpack(`${name}.csv.gz`), 1 << 20);
			const worstS = worst(run.timeS, plain.timeS);
			// Restarting lap times leave the step across the line to the usual one.
			expect(worstS, name).toBeLessThan(name === 'time_resets_each_lap' ? 1e-3 : 1e-6);
			for (const channel of ['speed', 'lapDistance', 'lap'] as const) {
				expect(worst(run.columns[channel] ?? [], plain.columns[channel] ?? []), `${name} ${channel}`).toBe(0);
			}
		}
	});

	it('converts each unit to the house unit', () => {
		const column = (name: string, channel: 'speed' | 'lapDistance' | 'brake') =>
			readInPieces(unpack(`${name}.csv.gz`), 1 << 20)[0].columns[channel] ?? new Float32Array();
		const speed = column('plain', 'speed');
		// Half a step of each file's last digit: 0.005 km/h here, 0.0005 m/s there.
		for (const name of ['speed_mph', 'speed_ms_undeclared'])
			expect(worst(column(name, 'speed'), speed), name).toBeLessThan(0.007);
		expect(worst(column('distance_km', 'lapDistance'), column('plain', 'lapDistance'))).toBeLessThan(0.006);
		expect(Math.max(...column('brake_kpa', 'brake'))).toBeCloseTo(80.75, 4);
	});

	it('gives the row of the file with each sample', () => {
		const [run] = readInPieces(unpack('preamble.csv.gz'), 999);
		expect([run.fileRow[0], run.fileRow.at(-1)]).toEqual([8, 8 + 1398]);
	});

	it('reads from a stream as from memory', async () => {
		const bytes = unpack('quoted_fields.csv.gz');
		async function* stream(): AsyncGenerator<Uint8Array> {
			for (let at = 0; at < bytes.length; at += 777) yield bytes.subarray(at, at + 777);
		}
		const [[streamed], [whole]] = [
			await readRun(stream(), { fileName: 'a.csv' }),
			await readRun(bytes, { fileName: 'a.csv' })
		];
		expect(streamed.source).toEqual(whole.source);
		expect(worst(streamed.columns.speed ?? [], whole.columns.speed ?? [])).toBe(0);
		expect(worst(streamed.timeS, whole.timeS)).toBe(0);
	});
});

/** Largest difference; NaN where the lengths differ. */
function worst(a: ArrayLike<number>, b: ArrayLike<number>): number {
	let largest = a.length === b.length ? 0 : NaN;
	for (let i = 0; i < a.length; i++) largest = Math.max(largest, Math.abs(a[i] - b[i]));
	return largest;
}

function refusal(bytes: Uint8Array): KerbnoteError {
	try {
		readInPieces(bytes, 1 << 16);
	} catch (error) {
		if (error instanceof KerbnoteError) return error;
		throw error;
	}
	throw new Error('the file was accepted');
}
