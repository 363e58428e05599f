import { describe, expect, it } from 'vitest';
import { channelSchema } from '../schemas/channels.ts';
import { targetKindSchema, type Target } from '../schemas/target.ts';
import { CHANNEL_ORDER } from './channels.ts';
import { deviceName } from './device.ts';
import { describeLap } from './laps.ts';
import { atLayout, layoutName, runName } from './runs.ts';
import { describeSource } from './source.ts';
import { describeUpload, isSettled } from './uploads.ts';
import { TARGET_KIND_TEXT, targetScopeText, targetText } from './targets.ts';
import { warningText } from './warnings.ts';

describe('describeLap', () => {
	it.each([
		{ lap: { kind: 'timed', clean: true, reasons: [] }, expected: 'timed, clean' },
		{ lap: { kind: 'timed', clean: false, reasons: ['off_path'] }, expected: 'timed, left the circuit' },
		{
			lap: { kind: 'timed', clean: false, reasons: ['slow', 'pit_lane'] },
			expected: 'timed, slow lap, through the pit lane'
		},
		{ lap: { kind: 'timed', clean: false, reasons: [] }, expected: 'timed, not clean' },
		{
			lap: { kind: 'timed', clean: true, reasons: ['time_coarse'] },
			expected: 'timed, clean, time as coarse as the samples'
		},
		{ lap: { kind: 'out', clean: false, reasons: ['out_lap'] }, expected: 'out lap' },
		{ lap: { kind: 'out', clean: false, reasons: ['out_lap', 'standing_start'] }, expected: 'out lap, standing start' },
		{ lap: { kind: 'partial', clean: false, reasons: ['partial'] }, expected: 'part of a lap' }
	] as const)('says "$expected"', ({ lap, expected }) => {
		expect(describeLap(lap)).toBe(expected);
	});
});

describe('names of runs and layouts', () => {
	const now = new Date('2026-06-01T00:00:00Z');

	it('calls a run by its day and its place in the day', () => {
		const run = { startedAt: '2026-05-14T14:00:00Z', uploadedAt: '2026-05-15T09:00:00Z', runOfDay: 2 };
		expect(runName(run, { now })).toBe('14\u00a0May, run\u00a02');
	});

	it('falls back on the day of the upload', () => {
		const run = { startedAt: null, uploadedAt: '2026-05-15T09:00:00Z', runOfDay: 1 };
		expect(runName(run, { now })).toBe('15\u00a0May, run\u00a01');
	});

	it.each([
		{ name: 'grand prix', circuit: 'Vallmere Park', expected: 'Vallmere Park, grand prix' },
		{ name: '', circuit: 'Tern Hollow', expected: 'Tern Hollow' },
		{ name: 'Tern Hollow', circuit: 'Tern Hollow', expected: 'Tern Hollow' },
		{ name: 'Full layout', circuit: 'Unnamed circuit', expected: 'Unnamed circuit' }
	])('calls a layout $expected', ({ name, circuit, expected }) => {
		expect(layoutName({ name, circuit: { id: 'x', name: circuit } })).toBe(expected);
	});
});

describe('atLayout', () => {
	it('does not set a stand-in as if it were a name', () => {
		const circuit = { id: 'x', name: 'Unnamed circuit' };
		expect(atLayout({ name: 'Full layout', circuit })).toBe('on a circuit without a name yet');
		expect(atLayout({ name: 'short', circuit: { id: 'x', name: 'Vallmere Park' } })).toBe('at Vallmere Park, short');
	});
});

describe('CHANNEL_ORDER', () => {
	it('names every channel once', () => {
		expect([...CHANNEL_ORDER].sort()).toEqual([...channelSchema.options].sort());
	});
});

describe('warningText', () => {
	it('makes a sentence of the message and says what follows', () => {
		expect(warningText({ code: 'no_clean_lap', message: 'no lap of this run is clean' })).toBe(
			'No lap of this run is clean. The fastest timed lap stands in for it.'
		);
	});

	it('leaves a message alone that says it all', () => {
		expect(warningText({ code: 'metadata', message: 'Two lines above the table were read.' })).toBe(
			'Two lines above the table were read.'
		);
	});
});

describe('describeSource', () => {
	const source = {
		rows: 92210,
		sampleRateHz: 100,
		columns: [],
		warnings: [],
		encoding: 'utf-8',
		delimiter: ',',
		decimal: '.',
		headerRow: 14,
		metadata: {}
	} as const;
	const shown = (changes: object) =>
		describeSource({ ...source, columns: [], warnings: [], ...changes }, 18_400_000).replaceAll('\u00a0', ' ');

	it.each([
		{ changes: {}, expected: '18.4 MB, 92 210 rows, 100 a second · comma, decimal point · names in row 14' },
		{
			changes: { delimiter: '\t', decimal: ',', headerRow: null, sampleRateHz: 9.9 },
			expected: '18.4 MB, 92 210 rows, 9.9 a second · tab, decimal comma · no row of names'
		}
	])('says "$expected"', ({ changes, expected }) => {
		expect(shown(changes)).toBe(expected);
	});
});

describe('describeUpload', () => {
	it.each([
		{ upload: { state: 'reading', stage: 'laps', error: null }, expected: 'finding laps', settled: false },
		{ upload: { state: 'stored', stage: 'waiting', error: null }, expected: 'waiting its turn', settled: false },
		{ upload: { state: 'analysed', stage: 'done', error: null }, expected: 'understood', settled: true },
		{
			upload: {
				state: 'refused',
				stage: 'reading',
				error: { code: 'no_header', message: 'no row of names', row: 1, column: null, remedy: 'Export it with names' }
			},
			expected: 'refused: no row of names',
			settled: true
		}
	] as const)('says "$expected"', ({ upload, expected, settled }) => {
		expect(describeUpload(upload)).toBe(expected);
		expect(isSettled(upload)).toBe(settled);
	});
});

describe('deviceName', () => {
	it.each([
		['Mozilla/5.0 (Windows NT 10.0; Win64; x64; rv:140.0) Gecko/20100101 Firefox/140.0', 'Firefox on Windows'],
		[
			'Mozilla/5.0 (X11; Linux x86_64) AppleWebKit/537.36 (KHTML, like Gecko) Chrome/150.0 Safari/537.36',
			'Chrome on Linux'
		],
		[
			'Mozilla/5.0 (iPhone; CPU iPhone OS 19_0 like Mac OS X) AppleWebKit/605.1.15 Version/19.0 Mobile Safari/604.1',
			'Safari on iPhone'
		],
		['Mozilla/5.0 (Windows NT 10.0) AppleWebKit/537.36 Chrome/150.0 Safari/537.36 Edg/150.0', 'Edge on Windows'],
		['curl/8.5.0', 'a program'],
		[null, 'a program']
	])('calls %s "%s"', (userAgent, expected) => {
		expect(deviceName(userAgent)).toBe(expected);
	});
});

describe('targetText', () => {
	const target = (fields: Partial<Target>): Target => ({
		kind: 'peak_brake',
		least: null,
		most: null,
		base: 'value',
		scope: { dryOnly: false, afterLap: null, holdsOver: null },
		notSlower: true,
		text: '',
		...fields
	});

	it.each([
		[{ most: 75 }, 'peak brake at most 75 %'],
		[{ kind: 'onset', least: 405, most: 415 }, 'brake point between 405 m and 415 m'],
		[{ kind: 'pick_up', most: 455 }, 'throttle pick-up not after 455 m'],
		[{ kind: 'trail_until', least: 440 }, 'brake off not before 440 m'],
		[{ kind: 'light_hold', least: 0.5, most: 0.7 }, 'light hold between 0.50 s and 0.70 s'],
		[{ kind: 'minimum_speed', least: 3, base: 'own_median' }, 'minimum speed at least +3 km/h against your usual'],
		[{ kind: 'lap_time', most: -0.5, base: 'reference' }, 'lap time at most −0.500 s against the reference'],
		[{ kind: 'no_lock_up' }, 'no lock-up'],
		[{ kind: 'free', text: 'Look to the exit' }, 'Look to the exit']
	] as Array<[Partial<Target>, string]>)('tells %j', (fields, expected) => {
		expect(targetText(target(fields)).replaceAll('\u00a0', ' ')).toBe(expected);
	});

	it('tells when it counts', () => {
		expect(targetScopeText(target({}))).toBeNull();
		const scope = { dryOnly: true, afterLap: 2, holdsOver: { laps: 4, of: 5 } };
		expect(targetScopeText(target({ scope }))).toBe('dry laps only, after lap 2, 4 of 5 laps');
	});

	it('has words for every kind', () => {
		for (const kind of targetKindSchema.options) expect(TARGET_KIND_TEXT[kind].trim(), kind).not.toBe('');
	});
});
