import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { ComparisonView } from '../schemas/views.ts';
import { circuitPlan } from './circuitPlan.ts';
import { comparePage } from './comparePage.ts';
import { cornerCard, type CornerCard } from './cornerCard.ts';
import { EXAMPLE_NAMES, exampleView } from './example/exampleViews.ts';
import { exampleComparison } from './example/exampleComparison.ts';
import { pathNumbers } from './geometry/pathNumbers.ts';
import { UNITS_PER_PX, WIDTH_UNITS } from './geometry/units.ts';

/** Each example is worked out once for all tests that look at it. */
const views = EXAMPLE_NAMES.map((name) => {
	const example = exampleView(name);
	return { ...example, card: cardOf(example.view, example.corner), page: comparePage(example.view) };
});
const typical = views[0].view;

function cardOf(view: ComparisonView, corner: number): CornerCard {
	const card = cornerCard(view, corner);
	if (!card) throw new Error(`the example requires corner ${corner}`);
	return card;
}

/** Everything of a model that is drawn or said. */
function expectDrawable(model: object): void {
	const text = JSON.stringify(model);
	expect(text).not.toMatch(/NaN|Infinity|undefined/);
}

describe('every example', () => {
	it.each(views)('$name makes a card and a page without a number that is none', ({ card, page }) => {
		expectDrawable(card);
		expectDrawable(page);
	});

	it.each(views)('$name keeps curves within their rows and rings beside them', ({ card }) => {
		for (const row of card.rows) {
			for (const d of [row.driver, row.reference])
				for (const [x, y] of pathNumbers(d)) {
					expect(x).toBeGreaterThanOrEqual(0);
					expect(x).toBeLessThanOrEqual(WIDTH_UNITS);
					expect(y).toBeGreaterThanOrEqual(0);
					expect(y).toBeLessThanOrEqual(row.heightPx * UNITS_PER_PX);
				}
		}
		for (const tag of card.tags) {
			expect(tag.atM).toBeGreaterThanOrEqual(card.window.fromM);
			expect(tag.atM).toBeLessThanOrEqual(card.window.toM);
			for (const [dx, dy] of [tag.wide, tag.narrow]) expect(Math.hypot(dx, dy)).toBeLessThan(30);
		}
	});

	it.each(views)('$name ends its ledger at the gap', ({ view, page }) => {
		const { columns, sums, gapBar, zeroPx } = page.ledger;
		expect(columns.reduce((sum, column) => sum + column.total.deltaS, 0)).toBeCloseTo(view.comparison.deltaS, 5);
		expect(sums[0].deltaS + sums[1].deltaS + sums[2].deltaS).toBeCloseTo(sums[3].deltaS, 9);
		expect(sums[3].deltaS).toBeCloseTo(view.comparison.deltaS, 9);
		const last = columns[columns.length - 1].bars.slice(-1)[0];
		const gapEnd = view.comparison.deltaS >= 0 ? gapBar.topPx : gapBar.topPx + gapBar.heightPx;
		if (Math.abs(view.comparison.deltaS) > 0.01) expect(last.endPx).toBeCloseTo(gapEnd, 0);
		else expect(gapEnd).toBeCloseTo(zeroPx, 0);
		for (const column of columns) for (const bar of column.bars) expect(bar.heightPx).toBeGreaterThanOrEqual(1.4);
	});

	it.each(views)('$name names each corner once on its page', ({ page: { groups, cards } }) => {
		const named = [...groups.lost.corners, ...groups.found.corners, ...groups.level.corners.map((c) => c.number)];
		expect(named.sort((a, b) => a - b)).toEqual(cards.map((card) => card.number));
	});
});

describe('cornerCard', () => {
	it('is null for a corner that is not there', () => expect(cornerCard(typical, 99)).toBeNull());

	it('says the gap with sign, unit and word, and the pens with times', () => {
		const card = cardOf(typical, 4);
		expect(card.gap.text).toMatch(/^\+0\.\d{3}\u00a0s\u00a0lost$/);
		expect(card.driver).toMatchObject({ name: 'Mira Tansley', which: 'lap\u00a06' });
		expect(card.neighbours).toEqual({
			previous: { number: 3, call: '3\u00a0Ridge End' },
			next: { number: 5, call: '5\u00a0Weir' }
		});
	});

	it('leads round a closed layout and ends at the ends of an open one', () => {
		expect(cardOf(typical, 1).neighbours.previous?.number).toBe(12);
		const open = { ...typical, path: { ...typical.path, closed: false } };
		expect(cardOf(open, 1).neighbours.previous).toBeNull();
		expect(cardOf(open, 12).neighbours.next).toBeNull();
	});

	it('reads at the cursor what the grids hold there', () => {
		const { cursor } = cardOf(typical, 4);
		const at = cursor.placeM + typical.driverGrid.marginM;
		expect(cursor.driver.speed).toBeCloseTo(typical.driverGrid.speedKmh[at], 2);
		expect(cursor.reference.brake).toBeCloseTo(typical.referenceGrid.brakePct?.[at] ?? NaN, 2);
	});

	it('has no plan without a shape, and says so of lines without positions', () => {
		expect(cardOf(exampleComparison({ without: ['positions'] }), 4).plan).toBeNull();
		const bent = exampleComparison({ without: ['positions'] });
		const view: ComparisonView = { ...bent, path: { ...bent.path, origin: 'latAcc' } };
		expect(cardOf(view, 4).plan?.note).toMatch(/both lines lie on the layout’s path/);
	});

	it('runs the entry up and leaves a hole where the car is not known to be', () => {
		const { plan } = cardOf(typical, 4);
		if (!plan) throw new Error('the example requires a plan');
		const [, firstY, , secondY] = plan.track.driver;
		expect(firstY).toBeGreaterThan(0);
		expect(secondY).toBeLessThan(0);
		const gap = cardOf(exampleComparison({ gaps: [[425, 450]] }), 4).plan;
		expect(gap?.track.driver).toContain(null);
		expect((gap?.driver.match(/M/g) ?? []).length).toBe(2);
	});

	it('mirrors with the circuit: labels of the inside change sides', () => {
		const side = (mirrored: boolean) =>
			cardOf(exampleComparison({ mirrored }), 4).plan?.labels.find((label) => label.kind === 'driver')?.anchor;
		expect([side(false), side(true)]).toEqual(['start', 'end']);
	});

	it('gives a driver who reads mph speeds in mph', () => {
		const card = cornerCard(typical, 4, { speedUnit: 'mph' });
		expect(card?.slowest?.driver).toMatch(/mph$/);
		expect(card?.numbers.find((row) => row.key === 'minKmh')?.driver).toMatch(/mph$/);
	});
});

describe('circuitPlan', () => {
	it('grows the figure with the loss, rings what was found, and keeps all of them on the drawing', () => {
		const plan = circuitPlan(typical);
		if (!plan) throw new Error('the example requires a plan');
		const bySize = [...plan.figures].filter((f) => f.word === 'lost').sort((a, b) => b.sizePx - a.sizePx);
		const worst = typical.comparison.ledger.reduce((a, b) => (b.corner > 0 && b.totalS > a.totalS ? b : a));
		expect(bySize[0]).toMatchObject({ corner: worst.corner, sizePx: 36 });
		expect(plan.figures).toHaveLength(12);
		for (const { x, y } of plan.figures) {
			expect(x).toBeGreaterThan(0);
			expect(x).toBeLessThan(plan.widthPx);
			expect(y).toBeGreaterThan(0);
			expect(y).toBeLessThan(plan.heightPx);
		}
	});
	it('is null without a shape', () => {
		expect(circuitPlan({ ...typical, path: { ...typical.path, origin: 'speedOnly' } })).toBeNull();
	});
});

describe('any line and any drop-out', () => {
	it('draws every corner, wherever the line lies and whatever is missing', () => {
		const gaps = fc.array(
			fc
				.tuple(fc.integer({ min: 0, max: 3500 }), fc.integer({ min: 1, max: 300 }))
				.map(([from, length]): [number, number] => [from, from + length]),
			{ maxLength: 3 }
		);
		fc.assert(
			fc.property(fc.integer({ min: 0, max: 3600 }), gaps, fc.boolean(), (lineAtM, holes, mirrored) => {
				const view = exampleComparison({ lineAtM, gaps: holes, mirrored });
				for (const { number } of view.corners) expectDrawable(cardOf(view, number ?? 0));
				expectDrawable(comparePage(view));
			}),
			{ seed: 29, numRuns: 6 }
		);
	}, 60_000);
});
