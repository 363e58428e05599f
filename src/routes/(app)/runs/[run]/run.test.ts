import { describe, expect, it } from 'vitest';
import { run } from '../../../(dev)/pages-gallery/examples.ts';
import { runLede } from './runLede.ts';
import { leastEven, spreadRows } from './spreadRows.ts';

describe('runLede', () => {
	it.each([
		{
			changes: {},
			expected:
				'Six clean of seven timed laps, best 1:38.104. The best pass of each corner together is 0.402\u00a0s quicker.'
		},
		{ changes: { cleanLaps: 7, theoreticalBestS: null }, expected: 'Seven clean laps, best 1:38.104.' },
		{
			changes: { cleanLaps: 0, bestLap: { id: 'x', timeS: 104.39, clean: false }, theoreticalBestS: null },
			expected: 'Seven timed laps, none of them clean, fastest 1:44.390.'
		},
		{
			changes: { timedLaps: 0, cleanLaps: 0, bestLap: null, theoreticalBestS: null },
			expected: 'No timed lap in this run, so there is nothing to compare yet.'
		}
	])('says "$expected"', ({ changes, expected }) => {
		expect(runLede({ ...run, ...changes })).toBe(expected);
	});
});

describe('spreadRows', () => {
	it('names corners, counts the median from the best and scales by the widest spread', () => {
		const rows = spreadRows(run);
		expect(rows).toHaveLength(12);
		expect(rows[3]).toMatchObject({ corner: 4, name: 'Tern Hairpin', share: 1 });
		expect(rows[3].medianGapS).toBeCloseTo(0.34, 9);
		expect(rows[2].name).toBeNull();
		expect(rows[0].bestLapNumber).toBe(2);
	});

	it('finds the corner that varies most, and none where spreads are unknown', () => {
		expect(leastEven(spreadRows(run))?.corner).toBe(4);
		expect(leastEven(spreadRows({ ...run, spread: run.spread.map((row) => ({ ...row, sdS: null })) }))).toBeNull();
	});
});
