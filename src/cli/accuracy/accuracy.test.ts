import { describe, expect, it } from 'vitest';
import { AccuracyTable, holds, printTable } from './accuracyTable.ts';
import { measureAccuracy } from './measureAccuracy.ts';

describe('the whole pipeline against laps known in closed form', { timeout: 300_000 }, () => {
	it('holds every bar, from the bytes of a file to the cost of a finding', async () => {
		const rows = await measureAccuracy();
		console.log(printTable(rows));
		expect(rows.length).toBeGreaterThan(50);
		expect(rows.filter((row) => !holds(row))).toEqual([]);
	});
});

describe('AccuracyTable', () => {
	it('sums errors up by size, ranks between values as numpy does, and knows which bars hold', () => {
		const table = new AccuracyTable();
		for (const error of [-0.5, 0.1, 0.3]) table.add('onset', '60 Hz', error);
		table.add('onset', '20 Hz', 2);
		const [fine, coarse] = table.rows();
		// numpy.percentile([0.1, 0.3, 0.5], 95) is 0.48
		expect(fine).toMatchObject({ median: 0.3, p95: 0.48, worst: 0.5, bar: 0.3, count: 3 });
		expect([fine, coarse].map(holds)).toEqual([false, false]);
	});

	it('counts a value that lacks as wrong beyond any bar', () => {
		const table = new AccuracyTable();
		table.add('minSpeed', '60 Hz', NaN);
		const [row] = table.rows();
		expect(row).toMatchObject({ worst: null, p95: null });
		expect(holds(row)).toBe(false);
		expect(printTable([row])).toContain('! minimum speed, km/h');
	});
});
