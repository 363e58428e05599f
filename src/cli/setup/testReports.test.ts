import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { readPlaywrightReport, readVitestReport } from './testReports.mjs';

let folder: string;
let path: string;
beforeEach(() => {
	folder = mkdtempSync(join(tmpdir(), 'kerbnote-report-'));
	path = join(folder, 'report.json');
});
afterEach(() => rmSync(folder, { recursive: true }));

const clean = { numPassedTests: 12, numFailedTests: 0, numPendingTests: 0, numTodoTests: 0, testResults: [] };

describe('readVitestReport', () => {
	it.each([
		{ name: 'counts what passed and keeps quiet', report: clean, exitCode: 0, passed: 12, failed: 0, output: '' },
		{
			name: 'counts what failed',
			report: { ...clean, numFailedTests: 2 },
			exitCode: 1,
			passed: 12,
			failed: 2,
			output: 'log'
		},
		{
			name: 'takes a file that does not load for a failure',
			report: { ...clean, testResults: [{ status: 'failed', assertionResults: [] }] },
			exitCode: 1,
			passed: 12,
			failed: 1,
			output: 'log'
		},
		{
			name: 'takes a skipped test for a failure',
			report: { ...clean, numPendingTests: 1 },
			exitCode: 0,
			passed: 12,
			failed: 1,
			output: 'log\n1 tests are skipped: run them or remove them'
		},
		{
			name: 'takes an error outside every test for a failure',
			report: clean,
			exitCode: 1,
			passed: 12,
			failed: 1,
			output: 'log'
		},
		{
			name: 'takes a run without a test for a failure',
			report: { ...clean, numPassedTests: 0 },
			exitCode: 0,
			passed: 0,
			failed: 1,
			output: 'log\nno test ran'
		}
	])('$name', ({ report, exitCode, passed, failed, output }) => {
		writeFileSync(path, JSON.stringify(report));
		expect(readVitestReport(path, exitCode, 'log')).toEqual({ passed, failed, output });
	});

	it('does not count skipped tests where the person chose some by name', () => {
		writeFileSync(path, JSON.stringify({ ...clean, numPendingTests: 40 }));
		expect(readVitestReport(path, 0, 'log', true)).toEqual({ passed: 12, failed: 0, output: '' });
	});

	it('takes a missing report for a failure', () => {
		expect(readVitestReport(path, 0, '')).toEqual({ passed: 0, failed: 1, output: 'Vitest left no report' });
	});
});

describe('readPlaywrightReport', () => {
	it.each([
		{ stats: { expected: 8, unexpected: 0, flaky: 0, skipped: 0 }, exitCode: 0, passed: 8, failed: 0 },
		{ stats: { expected: 6, unexpected: 1, flaky: 1, skipped: 0 }, exitCode: 1, passed: 6, failed: 2 },
		{ stats: { expected: 6, unexpected: 0, flaky: 0, skipped: 2 }, exitCode: 0, passed: 6, failed: 2 }
	])('counts $stats', ({ stats, exitCode, passed, failed }) => {
		writeFileSync(path, JSON.stringify({ stats }));
		expect(readPlaywrightReport(path, exitCode, 'log')).toMatchObject({ passed, failed });
	});
});
