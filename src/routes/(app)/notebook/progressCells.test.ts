import { describe, expect, it } from 'vitest';
import type { NotebookPage } from '../../../lib/schemas/views.ts';
import { HEIGHT, progressCells } from './progressCells.ts';

const cell = (times: (number | null)[], referenceS: number | null = 6): NotebookPage['progress'][number] => ({
	corners: [4],
	names: ['Tern Hairpin'],
	points: times.map((bestS, index) => ({ runId: `run${index}`, startedAt: null, bestS, medianS: bestS })),
	referenceS
});

describe('progressCells', () => {
	it('measures against the reference where there is one', () => {
		const [model] = progressCells([cell([6.4, 6.3, 6.312])]);
		expect(model.lastS).toBeCloseTo(0.312, 9);
		expect(model.zero).toBe('reference');
		expect(model.change).toBe('0.09\u00a0s better over three runs');
	});

	it("measures against the driver's own best without one", () => {
		const [model] = progressCells([cell([6.4, 6.3, 6.35], null)]);
		expect(model.lastS).toBeCloseTo(0.05, 9);
		expect(model.zero).toBe('best');
	});

	it('calls a small change none and a loss worse', () => {
		expect(progressCells([cell([6.4, 6.41])])[0].change).toBe('no change over two runs');
		expect(progressCells([cell([6.3, 6.4])])[0].change).toBe('0.10\u00a0s worse over two runs');
	});

	it('leaves out a corner that only one run passed, and a run that missed it', () => {
		expect(progressCells([cell([6.3, null])])).toEqual([]);
		const [model] = progressCells([cell([6.3, null, 6.2])]);
		expect(model.dots).toHaveLength(2);
		expect(model.lastS).toBeCloseTo(0.2, 9);
	});

	it('draws all corners on one scale, slower higher', () => {
		const [slow, quick] = progressCells([cell([6.8, 6.6]), cell([6.1, 5.9])]);
		expect(slow.dots[0].y).toBeLessThan(quick.dots[0].y);
		expect(slow.zeroY).toBe(quick.zeroY);
		expect(quick.dots[1].y).toBeGreaterThan(quick.zeroY);
		for (const dot of [...slow.dots, ...quick.dots]) {
			expect(dot.y).toBeGreaterThanOrEqual(0);
			expect(dot.y).toBeLessThanOrEqual(HEIGHT);
		}
	});

	it('joins the corners of a chain', () => {
		expect(progressCells([{ ...cell([6, 6]), corners: [4, 5, 6], names: ['Tern', null, 'Weir'] }])[0]).toMatchObject({
			numbers: '4–6',
			name: 'Tern, Weir'
		});
	});
});
