import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { extremeIndices } from './extremeIndices';

const xs = (n: number): number[] => Array.from({ length: n }, (_, i) => i);

describe('extremeIndices', () => {
	it('keeps every point where there are no more than pixels', () => {
		expect(extremeIndices(xs(5), [3, 1, 4, 1, 5], 1)).toEqual([0, 1, 2, 3, 4]);
	});
	it('keeps a spike of one sample among many', () => {
		const ys = Array.from({ length: 1000 }, (_, i) => (i === 537 ? 100 : 0));
		expect(extremeIndices(xs(1000), ys, 50)).toContain(537);
	});
	it('keeps a gap as one entry, and both of its edges', () => {
		const ys = xs(100).map((i) => (i > 40 && i < 60 ? NaN : 1));
		const kept = extremeIndices(xs(100), ys, 25);
		expect(kept).toContain(40);
		expect(kept).toContain(60);
		expect(kept.filter((i) => Number.isNaN(ys[i]))).toEqual([41]);
	});
	it('covers in each column what all points cover, in no more than four points', () => {
		fc.assert(
			fc.property(fc.array(fc.integer({ min: -50, max: 50 }), { minLength: 1, maxLength: 300 }), (ys) => {
				const kept = extremeIndices(xs(ys.length), ys, 10);
				for (let column = 0; column * 10 < ys.length; column++) {
					const all = ys.slice(column * 10, column * 10 + 10);
					const drawn = kept.filter((i) => Math.floor(i / 10) === column).map((i) => ys[i]);
					expect(Math.min(...drawn)).toBe(Math.min(...all));
					expect(Math.max(...drawn)).toBe(Math.max(...all));
					expect(drawn.length).toBeLessThanOrEqual(4);
				}
				expect(kept).toEqual([...kept].sort((a, b) => a - b));
				expect(kept[0]).toBe(0);
				expect(kept[kept.length - 1]).toBe(ys.length - 1);
			})
		);
	});
	it('refuses a column without width', () => {
		expect(() => extremeIndices([0], [0], 0)).toThrow('unitsPerPx > 0');
	});
});
