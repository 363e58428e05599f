import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Channels, Lap, PlacedRun } from '../model.ts';
import { cellTimes, theoreticalBest } from './cellTimes.ts';

const LENGTH_M = 100;

/** Two and a half laps at 10 m/s, a sample each 0.5 s. */
function steadyRun(): PlacedRun {
	const timeS = Float64Array.from({ length: 51 }, (_, i) => i / 2);
	const speedKmh = timeS.map(() => 36);
	const channels = { timeS, speedKmh } as Channels;
	return {
		channels,
		placeM: timeS.map((s) => 10 * s),
		offsetM: null,
		curvaturePerM: null,
		laps: [],
		path: {
			lengthM: LENGTH_M,
			closed: true,
			xM: new Float64Array(),
			yM: new Float64Array(),
			curvaturePerM: new Float64Array(),
			speedKmh: new Float64Array(),
			origin: 'speedOnly',
			line: 'mark',
			frame: null
		}
	};
}

const lap = (turn: number | null): Lap => ({
	number: 1,
	kind: 'timed',
	startS: 0,
	endS: 10,
	lengthM: LENGTH_M,
	clean: true,
	reasons: [],
	plusMinusS: 0,
	turn
});

describe('cellTimes', () => {
	const cells = [
		{ corners: [1], startM: 10, endM: 40.5 },
		{ corners: [2, 3], startM: 40.5, endM: 90 },
		{ corners: [4], startM: 90, endM: 10 }
	];

	it('times each cell, the one that the line cuts on into the next lap', () => {
		expect(cellTimes(steadyRun(), lap(0), cells)).toEqual([
			expect.closeTo(3.05, 9),
			expect.closeTo(4.95, 9),
			expect.closeTo(2, 9)
		]);
	});

	it('has no time for a cell that the run does not reach the end of', () => {
		expect(cellTimes(steadyRun(), lap(2), cells).map((s) => s === null)).toEqual([false, true, true]);
	});

	it('has no times for a lap that is no whole turn', () => {
		expect(cellTimes(steadyRun(), lap(null), cells)).toEqual([null, null, null]);
	});
});

describe('theoreticalBest', () => {
	it('adds up the best time of each cell', () => {
		expect(
			theoreticalBest(
				[
					[3, 5],
					[4, 4]
				],
				2
			)
		).toBe(7);
	});

	it('is not known where no lap has a time for a cell, or there are no cells or laps', () => {
		expect(theoreticalBest([[3, null]], 2)).toBeNull();
		expect(theoreticalBest([[]], 0)).toBeNull();
		expect(theoreticalBest([], 2)).toBeNull();
	});

	it('is never above the best lap', () => {
		const laps = fc.array(fc.array(fc.double({ min: 1, max: 90, noNaN: true }), { minLength: 4, maxLength: 4 }), {
			minLength: 1
		});
		fc.assert(
			fc.property(laps, (rows) => {
				const best = Math.min(...rows.map((row) => row.reduce((sum, s) => sum + s, 0)));
				expect(theoreticalBest(rows, 4)).toBeLessThanOrEqual(best + 1e-9);
			}),
			{ seed: 3, numRuns: 200 }
		);
	});
});
