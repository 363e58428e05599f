import fc from 'fast-check';
import { quantileSorted } from 'simple-statistics';
import { describe, expect, it } from 'vitest';
import { median, quantile } from './quantile.ts';
import { robustSpread } from './robustSpread.ts';

describe('quantile', () => {
	// numpy.quantile([7, 1, 4, 9, 2, 6], q), numpy 2.4
	it.each([
		{ share: 0, expected: 1 },
		{ share: 0.1, expected: 1.5 },
		{ share: 0.25, expected: 2.5 },
		{ share: 0.5, expected: 5 },
		{ share: 0.9, expected: 8 },
		{ share: 1, expected: 9 }
	])('agrees with numpy at $share', ({ share, expected }) => {
		expect(quantile([7, 1, 4, 9, 2, 6], share)).toBeCloseTo(expected, 12);
	});

	it('leaves out what is not known', () => {
		expect(quantile([NaN, 3, NaN, 1], 0.5)).toBe(2);
		expect(median([NaN, NaN])).toBeNaN();
	});

	it('refuses a share that is none', () => {
		expect(() => quantile([1], 1.1)).toThrow(RangeError);
		expect(() => quantile([1], NaN)).toThrow(RangeError);
	});

	it('lies between two order statistics and does not touch its input', () => {
		const values = fc.array(fc.double({ min: -1e6, max: 1e6, noNaN: true }), { minLength: 1, maxLength: 50 });
		fc.assert(
			fc.property(values, fc.double({ min: 0, max: 1, noNaN: true }), (list, share) => {
				const copy = [...list];
				const value = quantile(list, share);
				const sorted = [...list].sort((a, b) => a - b);
				const low = Math.floor((list.length - 1) * share);
				expect(value).toBeGreaterThanOrEqual(sorted[low] - 1e-9);
				expect(value).toBeLessThanOrEqual(sorted[Math.min(low + 1, list.length - 1)] + 1e-9);
				expect(list).toEqual(copy);
			}),
			{ seed: 3, numRuns: 200 }
		);
	});

	it('has the median that simple-statistics finds', () => {
		expect(median([5, 3, 8, 1])).toBe(quantileSorted([1, 3, 5, 8], 0.5));
	});
});

describe('robustSpread', () => {
	it('is 1.4826 times the median absolute deviation', () => {
		// scipy.stats.median_abs_deviation([2, 4, 4, 5, 90], scale='normal') = 1.482602218505602
		expect(robustSpread([2, 4, 4, 5, 90])).toBeCloseTo(1.482602218505602, 12);
	});
});
