import { describe, expect, it } from 'vitest';
import { analyseRun } from '../analysis/analyseRun.ts';
import { KerbnoteError } from '../schemas/kerbnoteError.ts';
import type { RawRun } from './rawRun.ts';
import { RunReader } from './runReader.ts';
import { ACCEPTED_CASES, REFUSED_CASES } from './testing/cases.ts';
import { testRecording } from './testing/recording.ts';

const samples = testRecording();

function read(bytes: Uint8Array, pieceBytes: number): RawRun[] {
	const reader = new RunReader({ fileName: 'file.csv' });
	for (let at = 0; at < bytes.length; at += pieceBytes) reader.push(bytes.subarray(at, at + pieceBytes));
	return reader.end();
}

describe('files as people write them', () => {
	it('are more than sixty kinds', () => {
		expect(ACCEPTED_CASES.length + REFUSED_CASES.length).toBeGreaterThanOrEqual(100);
	});

	it.each(ACCEPTED_CASES)('reads: $name', (one) => {
		const runs = read(one.bytes, 40_009);
		expect(runs.length).toBe(one.runs ?? 1);
		const [run] = runs;
		const channels = run.source.columns.map(({ channel }) => channel);
		for (const channel of one.channels ?? [])
			expect(Object.keys(run.columns).includes(channel) || channels.includes(channel), channel).toBe(true);
		for (const [channel, unit] of Object.entries(one.units ?? {})) {
			expect(run.source.columns.find((column) => column.channel === channel)?.unit, channel).toBe(unit);
		}
		const codes = run.source.warnings.map(({ code }) => code);
		for (const code of one.warnings ?? []) expect(codes).toContain(code);
		if (one.sameTime) {
			expect(run.timeS.length).toBe(samples.length);
			expect(Math.max(...run.timeS.map((time, i) => Math.abs(time - samples[i].timeS)))).toBeLessThan(1e-3);
			const { speed } = run.columns;
			if (speed)
				expect(Math.max(...Array.from(speed, (value, i) => Math.abs(value - samples[i].speedKmh)))).toBeLessThan(
					one.speedWithin ?? 0
				);
		}
	});

	const withLaps = ACCEPTED_CASES.filter(({ laps, runs }) => laps !== null && runs === undefined);
	it.each(withLaps)('finds the laps: $name', ({ bytes, laps }) => {
		const { document } = analyseRun(read(bytes, 1 << 20));
		const timed = document.laps.filter(({ kind }) => kind === 'timed');
		expect(timed.length).toBe(laps ?? 3);
	});

	it.each(REFUSED_CASES)('refuses with $code: $name', ({ bytes, code, row }) => {
		const error = refusal(bytes);
		expect(error.code).toBe(code);
		expect(error.file).toBe('file.csv');
		expect(error.message).not.toMatch(/[.!\n]$/);
		expect(error.remedy.length).toBeGreaterThan(10);
		if (row !== undefined) expect(error.row).toBe(row);
		if (code === 'needs_answer')
			expect(error.question?.columns.some(({ suggested }) => suggested === 'time')).toBe(true);
	});
});

function refusal(bytes: Uint8Array): KerbnoteError {
	try {
		read(bytes, 1 << 16);
	} catch (error) {
		if (error instanceof KerbnoteError) return error;
		throw error;
	}
	throw new Error('the file was accepted');
}
