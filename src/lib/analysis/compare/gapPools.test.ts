import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { GapPools } from './gapPools.ts';

const parts = (pools: GapPools) => Array.from(pools.parts);

describe('GapPools', () => {
	it('charges growth to the pool at hand and lets all shrink alike', () => {
		const pools = new GapPools(3);
		pools.change(10, 0);
		pools.settle();
		pools.change(40, 1);
		pools.settle();
		pools.change(20, 2);
		expect(parts(pools)).toEqual([5, 15, 0]);
	});

	it('follows a wiggle down and up again without charging anybody', () => {
		const pools = new GapPools(2);
		pools.change(10, 0);
		pools.settle();
		for (const gap of [9, 8, 9, 10, 7, 10]) pools.change(gap, 1);
		expect(parts(pools)).toEqual([10, 0]);
		pools.change(12, 1);
		expect(parts(pools)).toEqual([10, 2]);
	});

	it('wipes everything out where the gap changes sides', () => {
		const pools = new GapPools(2);
		pools.change(10, 0);
		pools.settle();
		pools.change(-4, 1);
		expect(parts(pools)).toEqual([0, -4]);
	});

	it('lets the old parts drift before anybody is charged', () => {
		const pools = new GapPools(2);
		pools.change(10, 0);
		pools.settle();
		pools.change(12, 1, 1.3);
		expect(parts(pools)).toEqual([12, 0]);
		pools.change(15, 1, 1.3);
		expect(parts(pools)).toEqual([13, 2]);
	});

	it('cancels parts that stand against the gap, so that none of them outlives it', () => {
		const pools = new GapPools(3);
		pools.change(12, 0);
		pools.evolve(2, 1, 1);
		expect(parts(pools)).toEqual([12, -10, 0]);
		pools.cancel();
		expect(parts(pools)).toEqual([2, 0, 0]);
		pools.evolve(-3, 1, 1);
		pools.cancel();
		expect(parts(pools)).toEqual([0, -3, 0]);
	});

	it('keeps the sum of the parts equal to the gap, in any order of changes', () => {
		const step = fc.record({
			next: fc.double({ min: -50, max: 50, noNaN: true }),
			pool: fc.integer({ min: 0, max: 4 }),
			settle: fc.boolean(),
			byFactor: fc.option(fc.double({ min: 0, max: 2, noNaN: true }))
		});
		fc.assert(
			fc.property(fc.array(step, { maxLength: 60 }), (steps) => {
				const pools = new GapPools(5);
				for (const { next, pool, settle, byFactor } of steps) {
					if (settle) pools.settle();
					if (byFactor === null) pools.change(next, pool);
					else {
						pools.evolve(next, byFactor, pool);
						pools.settle();
					}
					expect(pools.gap).toBe(next);
					expect(parts(pools).reduce((sum, part) => sum + part, 0)).toBeCloseTo(next, 6);
				}
			}),
			{ seed: 11, numRuns: 300 }
		);
	});
});
