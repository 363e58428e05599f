import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { debriefLedger } from './debriefLedger.ts';

describe('debriefLedger', () => {
	it('steps from corner to corner and ends in the gap', () => {
		const steps = debriefLedger([
			{ corner: 0, totalS: 0.0001 },
			{ corner: 1, totalS: 0.3 },
			{ corner: 2, totalS: -0.1 }
		]);
		expect(steps.map(({ head, text, word }) => [head, text, word])).toEqual([
			['1', '+0.300', 'lost'],
			['2', '−0.100', 'found'],
			['the gap', '+0.200', 'lost']
		]);
		// 0.3 s is the whole height; the gap starts at the foot and is two thirds of it high.
		expect(steps[0]).toMatchObject({ top: 0, height: 1 });
		expect(steps[2]).toMatchObject({ top: 0.3333, height: 0.6667 });
	});

	it('tells the run-up where it counts', () => {
		expect(debriefLedger([{ corner: 0, totalS: 0.05 }])[0].head).toBe('run-up');
	});

	it('stays within the drawing and sums to the gap', () => {
		fc.assert(
			fc.property(fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 1, maxLength: 20 }), (totals) => {
				const steps = debriefLedger(totals.map((totalS, i) => ({ corner: i + 1, totalS })));
				for (const { top, height, end } of steps) {
					expect(top).toBeGreaterThanOrEqual(0);
					expect(end).toBeLessThanOrEqual(1.0001);
					expect(top + height).toBeLessThanOrEqual(1.013);
				}
				const sum = totals.reduce((all, one) => all + one, 0);
				const told = Number(steps[steps.length - 1].text.replace('−', '-'));
				expect(Math.abs(told - sum)).toBeLessThanOrEqual(0.0005000001);
			}),
			{ numRuns: 300, seed: 11 }
		);
	});
});
