import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cornerAt } from '../metrics/testing/placedOf.ts';
import { cutCells } from './cutCells.ts';

describe('cutCells', () => {
	it('cuts just before the earliest usual onset', () => {
		const corners = [cornerAt(200, 240, 280), cornerAt(600, 640, 680, { number: 2 })];
		expect(
			cutCells(
				corners,
				1000,
				new Map([
					[1, 120],
					[2, 520]
				])
			)
		).toEqual([
			{ corners: [1], startM: 110, endM: 510 },
			{ corners: [2], startM: 510, endM: 110 }
		]);
	});

	it('keeps a linked chain in one cell and leaves kinks out', () => {
		const corners = [
			cornerAt(200, 240, 280, { linkedTo: 2 }),
			cornerAt(300, 330, 360, { number: 2 }),
			cornerAt(450, 470, 490, { number: null }),
			cornerAt(600, 640, 680, { number: 3 })
		];
		const cells = cutCells(
			corners,
			1000,
			new Map([
				[1, 120],
				[2, 290],
				[3, 520]
			])
		);
		expect(cells.map((cell) => cell.corners)).toEqual([[1, 2], [3]]);
	});

	it('does not cut before the last apex of the corner before', () => {
		const corners = [cornerAt(200, 240, 280), cornerAt(300, 340, 380, { number: 2 })];
		const [, second] = cutCells(
			corners,
			1000,
			new Map([
				[1, 120],
				[2, 230]
			])
		);
		expect(second.startM).toBe(240);
	});

	it('cuts ahead of a corner that nobody slows down for', () => {
		const corners = [cornerAt(200, 240, 280), cornerAt(600, 640, 680, { number: 2 })];
		const [, second] = cutCells(corners, 1000, new Map([[1, 120]]));
		expect(second.startM).toBe(550);
	});

	it('carries a border over the line where braking begins before it', () => {
		const corners = [cornerAt(30, 60, 90), cornerAt(600, 640, 680, { number: 2 })];
		const [first] = cutCells(
			corners,
			1000,
			new Map([
				[1, -40],
				[2, 520]
			])
		);
		expect(first.startM).toBe(950);
	});

	it('gives a lone corner the whole lap, and no corner no cell', () => {
		expect(cutCells([cornerAt(200, 240, 280)], 1000, new Map([[1, 120]]))).toEqual([
			{ corners: [1], startM: 110, endM: 110 }
		]);
		expect(cutCells([], 1000, new Map())).toEqual([]);
	});

	it('covers the lap exactly once', () => {
		const places = fc.uniqueArray(fc.integer({ min: 0, max: 19 }), { minLength: 2, maxLength: 8 });
		fc.assert(
			fc.property(places, fc.integer({ min: 5, max: 90 }), (slots, beforeM) => {
				const corners = slots
					.sort((a, b) => a - b)
					.map((slot, k) => cornerAt(slot * 100 + 20, slot * 100 + 50, slot * 100 + 80, { number: k + 1 }));
				const usual = new Map(corners.map(({ startM }, k) => [k + 1, startM - beforeM]));
				const cells = cutCells(corners, 2000, usual);
				const lengths = cells.map(({ startM, endM }) => (endM > startM ? endM - startM : endM - startM + 2000));
				expect(lengths.reduce((sum, length) => sum + length, 0)).toBeCloseTo(2000, 9);
				cells.forEach((cell, k) => expect(cell.endM).toBe(cells[(k + 1) % cells.length].startM));
			}),
			{ seed: 23, numRuns: 200 }
		);
	});
});
