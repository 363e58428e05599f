import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { analysisDocumentSchema, errorDocumentSchema } from '../lib/schemas/analysisDocument.ts';
import { pedalDocumentSchema } from '../lib/schemas/pedalDocument.ts';
import { stintDocumentSchema } from '../lib/schemas/stintDocument.ts';

/** Runs the real command, as package.json has it, without npm's own start. */

const ROOT = fileURLToPath(new URL('../..', import.meta.url));
const fixture = (name: string) => join(ROOT, 'fixtures', name);
let folder: string;

beforeAll(() => {
	folder = mkdtempSync(join(tmpdir(), 'analyse-'));
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

function analyse(...words: string[]) {
	return spawnSync(process.execPath, ['src/cli/analyse.mjs', ...words], {
		cwd: ROOT,
		encoding: 'utf8',
		maxBuffer: 1 << 28
	});
}

/** the error document on the last line of standard error, with nothing on standard output */
function refusal(run: ReturnType<typeof analyse>) {
	expect(run.stdout).toBe('');
	const last = run.stderr.trimEnd().split('\n').at(-1) ?? '';
	return errorDocumentSchema.parse(JSON.parse(last)).error;
}

describe('analyse, the command', { timeout: 60_000 }, () => {
	it('prints one document that its schema accepts, whole, also where it is longer than a pipe holds', () => {
		const run = analyse(fixture('closed-form/marrow_fen_session_20hz.csv.gz'), '--lap', '2', '--reference-lap', '1');
		expect(run.stderr).toBe('');
		expect(run.status).toBe(0);
		expect(run.stdout.length).toBeGreaterThan(1 << 16);
		expect(run.stdout).not.toContain('NaN');
		const document = analysisDocumentSchema.parse(JSON.parse(run.stdout));
		expect(document.comparison).toMatchObject({ lap: 2, referenceLap: 1, stepM: 1 });
		expect(document.comparison?.findings[0]).toMatchObject({ corner: 1, code: 'brake_early' });
	});

	it('lays one file on the path of another with --reference', () => {
		const run = analyse(
			fixture('closed-form/marrow_fen_lap_brake_early_60hz.csv.gz'),
			'--reference',
			fixture('closed-form/marrow_fen_lap_ref_60hz.csv.gz')
		);
		const document = analysisDocumentSchema.parse(JSON.parse(run.stdout));
		expect(document.comparison?.deltaS).toBeCloseTo(0.4571, 3);
	});

	it('judges a pedal sweep with --pedal and a stint with --stint, in a document each', () => {
		const pedal = analyse('--pedal', fixture('pedal/gamma_1p5_noise.csv.gz'));
		expect(pedal.stderr).toBe('');
		expect(pedalDocumentSchema.parse(JSON.parse(pedal.stdout)).verdict).toBe('progressive');
		const list = analyse('--stint', fixture('stint/fuel.csv.gz'), '--fuel', '2.1,0.032');
		const stint = stintDocumentSchema.parse(JSON.parse(list.stdout));
		expect(stint.fuelCorrected?.slopeSPerLap).toBeCloseTo(0.1005, 3);
		const recording = analyse('--stint', fixture('closed-form/marrow_fen_session_20hz.csv.gz'));
		const driven = stintDocumentSchema.parse(JSON.parse(recording.stdout));
		expect(driven.laps.length).toBeGreaterThan(3);
		expect(driven.fit?.n).toBeGreaterThan(3);
	});

	it('takes a line across the track, south or west of zero too', () => {
		const run = analyse(fixture('closed-form/marrow_fen_gpsonly_10hz.csv.gz'), '--line', '41.1998,-30.4,41.2002,-30.4');
		const document = analysisDocumentSchema.parse(JSON.parse(run.stdout));
		expect(document.path.line).toBe('mark');
		expect(document.laps.filter((lap) => lap.kind === 'timed').length).toBeGreaterThan(3);
		expect(document.comparison).toBeNull();
	});

	it.each([
		{ name: 'no file', words: [], code: 'bad_arguments' },
		{ name: 'a file that is not there', words: ['nowhere.csv'], code: 'file_not_found' },
		{ name: 'a folder', words: ['fixtures'], code: 'file_not_found' },
		{
			name: 'a lap that the file does not hold',
			words: [fixture('closed-form/marrow_fen_lap_ref_60hz.csv.gz'), '--lap', '77', '--reference-lap', '1'],
			code: 'no_such_lap'
		},
		{
			name: 'a run that the file does not hold',
			words: [fixture('closed-form/marrow_fen_lap_ref_60hz.csv.gz'), '--run', '9'],
			code: 'no_such_run'
		},
		{
			name: 'a reference from another circuit',
			words: [
				fixture('simulator/oval-a_driver-3.csv.gz'),
				'--reference',
				fixture('closed-form/marrow_fen_lap_ref_60hz.csv.gz')
			],
			code: 'reference_mismatch'
		},
		{ name: 'a sweep that is no table', words: ['--pedal', fixture('import/json.csv.gz')], code: 'not_csv' },
		{ name: 'a stint that is a picture', words: ['--stint', fixture('import/binary.csv.gz')], code: 'not_text' },
		{ name: 'a fuel effect that is none', words: ['--stint', 'a.csv', '--fuel', 'much'], code: 'bad_arguments' },
		{ name: 'a picture that calls itself a table', words: [fixture('import/binary.csv.gz')], code: 'not_text' }
	])('refuses $name with exit code 2, an error of one line, and nothing on standard output', ({ words, code }) => {
		const run = analyse(...words);
		expect(run.status).toBe(2);
		const error = refusal(run);
		expect(error.code).toBe(code);
		expect(error.remedy).not.toBe('');
	});

	it('says so where the gzip is broken', () => {
		const broken = join(folder, 'broken.csv.gz');
		writeFileSync(broken, Buffer.from([0x1f, 0x8b, 8, 0, 0, 0, 0, 0, 0, 0, 1, 2, 3, 4]));
		const run = analyse(broken);
		expect(run.status).toBe(2);
		expect(refusal(run).code).toBe('compressed_file');
	});
});
