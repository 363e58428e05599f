import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { theilSen } from './theilSen.ts';

describe('theilSen', () => {
	it('agrees with scipy.stats.theilslopes', () => {
		// scipy 1.17: theilslopes([2.1, 3.9, 6.3, 7.8, 30.0, 12.1], [1, 2, 3, 4, 5, 6])
		const line = theilSen([1, 2, 3, 4, 5, 6], [2.1, 3.9, 6.3, 7.8, 30, 12.1]);
		expect(line?.slope).toBeCloseTo(2.05, 9);
		expect(line?.intercept).toBeCloseTo(-0.12499999999999911, 9);
	});

	it('goes through exact points whatever a third of the others do', () => {
		const slope = fc.double({ min: -5, max: 5, noNaN: true });
		fc.assert(
			fc.property(slope, slope, fc.array(slope, { minLength: 3, maxLength: 3 }), (a, b, wild) => {
				const x = Array.from({ length: 12 }, (_, i) => i);
				const y = x.map((value) => a + b * value);
				wild.forEach((value, k) => (y[4 * k + 1] += 100 * value));
				const line = theilSen(x, y);
				expect(line?.slope).toBeCloseTo(b, 6);
			}),
			{ seed: 5, numRuns: 100 }
		);
	});

	it('has no line with fewer than two different x', () => {
		expect(theilSen([1, 1, NaN], [1, 2, 3])).toBeNull();
	});
});
