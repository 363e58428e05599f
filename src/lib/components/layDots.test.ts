import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { layDots } from './layDots.ts';

describe('layDots', () => {
	it('spreads times over the line, quickest first', () => {
		const { dots, firstS, lastS } = layDots([100, 98, 99], 5);
		expect(dots).toEqual([
			{ index: 1, atPct: 0, level: 0 },
			{ index: 2, atPct: 50, level: 0 },
			{ index: 0, atPct: 100, level: 0 }
		]);
		expect([firstS, lastS]).toEqual([98, 100]);
	});

	it('stacks what would cover each other', () => {
		expect(layDots([98, 98.01, 98.02, 100], 5).dots.map((dot) => dot.level)).toEqual([0, 1, 2, 0]);
	});

	it('keeps a lap that is far slower off the scale and says which', () => {
		const { dots, beyond, lastS } = layDots([98, 140, 99, 110], 5);
		expect(dots.map((dot) => dot.index)).toEqual([0, 2]);
		expect(beyond).toEqual([3, 1]);
		expect(lastS).toBe(99);
	});

	it('puts a single time in the middle and nothing for none', () => {
		expect(layDots([98], 5).dots).toEqual([{ index: 0, atPct: 50, level: 0 }]);
		expect(layDots([NaN], 5).dots).toEqual([]);
	});

	it('never lets two dots of one level come nearer than the gap', () => {
		fc.assert(
			fc.property(fc.array(fc.double({ min: 60, max: 63, noNaN: true }), { maxLength: 60 }), (timesS) => {
				const { dots, beyond } = layDots(timesS, 4);
				expect(dots.length + beyond.length).toBe(timesS.length);
				for (const dot of dots) {
					for (const other of dots) {
						if (dot.index !== other.index && dot.level === other.level) {
							expect(Math.abs(dot.atPct - other.atPct)).toBeGreaterThanOrEqual(4);
						}
					}
				}
			}),
			{ seed: 5, numRuns: 200 }
		);
	});
});
