import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { NARROWEST_M, panRange, rangeHolding, zoomRange, type ViewRange } from './viewRange';

const window: ViewRange = { fromM: 380, toM: 640 };
/** A view somewhere within the window. */
const views = fc
	.tuple(fc.double({ min: 20, max: 260, noNaN: true }), fc.double({ min: 0, max: 1, noNaN: true }))
	.map(([width, at]): ViewRange => {
		const fromM = 380 + at * (260 - width);
		return { fromM, toM: fromM + width };
	});
const isWithin = (view: ViewRange): boolean => view.fromM >= 380 - 1e-9 && view.toM <= 640 + 1e-9;

describe('zoomRange', () => {
	it('keeps the place under the fingers where it is', () => {
		const view = zoomRange(window, window, 2, 445);
		expect((445 - view.fromM) / (view.toM - view.fromM)).toBeCloseTo((445 - 380) / 260, 9);
		expect(view.toM - view.fromM).toBeCloseTo(130, 9);
	});
	it('goes back to the whole window, whatever was shown', () => {
		fc.assert(
			fc.property(views, fc.double({ min: 300, max: 700, noNaN: true }), (view, aboutM) => {
				const wide = zoomRange(view, window, 1e-3, aboutM);
				expect(wide.fromM).toBeCloseTo(380, 6);
				expect(wide.toM).toBeCloseTo(640, 6);
			})
		);
	});
	it('never leaves the window and never shows less than single samples', () => {
		fc.assert(
			fc.property(
				views,
				fc.double({ min: 0.05, max: 50, noNaN: true }),
				fc.double({ min: 0, max: 1000, noNaN: true }),
				(view, factor, aboutM) => {
					const next = zoomRange(view, window, factor, aboutM);
					expect(isWithin(next)).toBe(true);
					expect(next.toM - next.fromM).toBeGreaterThanOrEqual(NARROWEST_M - 1e-9);
				}
			)
		);
	});
	it('shows a window that is narrower than the narrowest view whole', () => {
		const tiny = { fromM: 10, toM: 22 };
		expect(zoomRange(tiny, tiny, 4, 15)).toEqual(tiny);
	});
	it('refuses a factor that is none', () => {
		expect(() => zoomRange(window, window, 0, 400)).toThrow('factor > 0');
		expect(() => zoomRange(window, window, NaN, 400)).toThrow('factor > 0');
	});
});

describe('panRange', () => {
	it('keeps the width and stops at the window’s ends', () => {
		fc.assert(
			fc.property(views, fc.double({ min: -500, max: 500, noNaN: true }), (view, byM) => {
				const next = panRange(view, window, byM);
				expect(isWithin(next)).toBe(true);
				expect(next.toM - next.fromM).toBeCloseTo(view.toM - view.fromM, 6);
			})
		);
	});
});

describe('rangeHolding', () => {
	it('does not move for a place that is in view', () => {
		const view = { fromM: 400, toM: 440 };
		expect(rangeHolding(view, window, 440)).toBe(view);
	});
	it('follows a place that leaves on either side', () => {
		fc.assert(
			fc.property(views, fc.double({ min: 380, max: 640, noNaN: true }), (view, placeM) => {
				const next = rangeHolding(view, window, placeM);
				expect(isWithin(next)).toBe(true);
				expect(placeM).toBeGreaterThanOrEqual(next.fromM - 1e-9);
				expect(placeM).toBeLessThanOrEqual(next.toM + 1e-9);
			})
		);
	});
});
