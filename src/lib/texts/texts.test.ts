import { describe, expect, it } from 'vitest';
import { channelSchema } from '../schemas/channels.ts';
import { CHANNEL_ORDER } from './channels.ts';
import { describeLap } from './laps.ts';
import { layoutName, runName } from './runs.ts';

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
		{ name: 'Tern Hollow', circuit: 'Tern Hollow', expected: 'Tern Hollow' }
	])('calls a layout $expected', ({ name, circuit, expected }) => {
		expect(layoutName({ name, circuit: { id: 'x', name: circuit } })).toBe(expected);
	});
});

describe('CHANNEL_ORDER', () => {
	it('names every channel once', () => {
		expect([...CHANNEL_ORDER].sort()).toEqual([...channelSchema.options].sort());
	});
});
