import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { CompactPath } from './CompactPath.ts';
import { pathNumbers } from './pathNumbers.ts';

describe('CompactPath', () => {
	it('writes whole numbers, each relative to the last point, and lets a minus sign separate', () => {
		const path = new CompactPath();
		path.moveTo(0, 10);
		path.lineTo(5, 7);
		path.lineTo(12, 7);
		expect(String(path)).toBe('M0 10l5-3 7 0');
	});

	it('leaves out a step that rounds to nothing and starts anew after a move and a close', () => {
		const path = new CompactPath();
		path.moveTo(1, 1);
		path.lineTo(1.2, 0.8);
		path.lineTo(4, 1);
		path.closePath();
		path.moveTo(-3, 0);
		path.lineTo(-3, 9);
		expect(String(path)).toBe('M1 1l3 0zM-3 0l0 9');
	});

	it('never writes "-0"', () => {
		const path = new CompactPath();
		path.moveTo(-0.2, -0.4);
		path.lineTo(3, -0.1);
		expect(String(path)).toBe('M0 0l3 0');
	});

	it('refuses a point that is not finite, because a path with NaN silently draws nothing', () => {
		const path = new CompactPath();
		expect(() => path.moveTo(NaN, 0)).toThrow(RangeError);
		expect(() => path.lineTo(0, Infinity)).toThrow(RangeError);
	});

	it('stays within half a unit of every point, however long the line', () => {
		const point = fc.tuple(
			fc.double({ min: -1e5, max: 1e5, noNaN: true }),
			fc.double({ min: -1e5, max: 1e5, noNaN: true })
		);
		fc.assert(
			fc.property(fc.array(point, { minLength: 2, maxLength: 200 }), (points) => {
				const path = new CompactPath();
				points.forEach(([x, y], i) => (i === 0 ? path.moveTo(x, y) : path.lineTo(x, y)));
				const [last] = pathNumbers(String(path)).slice(-1);
				const [x, y] = points[points.length - 1];
				expect(Math.abs(last[0] - x)).toBeLessThanOrEqual(0.5 + 1e-9);
				expect(Math.abs(last[1] - y)).toBeLessThanOrEqual(0.5 + 1e-9);
			}),
			{ seed: 3, numRuns: 200 }
		);
	});
});
