import { describe, expect, it } from 'vitest';
import type { ComparisonView, CornerView } from '../schemas/views';
import { bandRows } from './bandRows';
import { exampleComparison } from './example/exampleComparison';
import { pathNumbers } from './geometry/pathNumbers';
import { lapPage } from './lapPage';
import { linkedGroups } from './linkedGroups';

const view = exampleComparison();

describe('lapPage', () => {
	const page = lapPage(view);

	it('has every numbered corner as a band in order, within the lap', () => {
		expect(page.bands.map(({ number }) => number)).toEqual(
			view.corners.filter(({ number }) => number !== null).map(({ number }) => number)
		);
		for (const band of page.bands) {
			expect(band.fromM).toBeLessThan(band.toM);
			expect(band.fromM).toBeGreaterThanOrEqual(0);
			expect(band.toM).toBeLessThanOrEqual(page.window.toM);
		}
	});
	it('ends at the gap of the two laps', () => {
		expect(page.delta.end.deltaS).toBe(view.comparison.deltaS);
		expect(page.delta.end.text).toBe(page.gap.text);
	});
	it('draws no more than four points a pixel column, and still reaches the lowest and the highest speed', () => {
		const dense = lapPage(exampleComparison({ dense: true }));
		for (const row of dense.rows) {
			const points = pathNumbers(row.driver);
			const columns = new Map<number, number>();
			for (const [x] of points) columns.set(Math.floor(x / 10), (columns.get(Math.floor(x / 10)) ?? 0) + 1);
			expect(Math.max(...columns.values())).toBeLessThanOrEqual(4);
		}
		const speed = page.rows.find(({ key }) => key === 'speed');
		const drawn = pathNumbers(speed?.driver ?? '').map(([, y]) => y);
		const { speedKmh, marginM, lengthM } = view.driverGrid;
		const values = speedKmh.slice(marginM, marginM + Math.floor(lengthM) + 1);
		const y = (value: number): number => {
			const [low, high] = speed?.domain ?? [0, 1];
			return ((high - value) / (high - low)) * (speed?.heightPx ?? 0) * 10;
		};
		expect(Math.abs(Math.max(...drawn) - y(Math.min(...values)))).toBeLessThan(3);
		expect(Math.abs(Math.min(...drawn) - y(Math.max(...values)))).toBeLessThan(3);
	});
	it('lets the cursor wait where the words begin, and says the conclusion to those who hear it', () => {
		const worst = [...view.comparison.ledger].sort((a, b) => b.totalS - a.totalS)[0];
		const band = page.bands.find(({ number }) => number === worst.corner);
		expect(page.cursor.placeM).toBe(Math.round(band?.apexM ?? NaN));
		expect(page.alt).toContain(page.gap.text);
	});
	it('is a table by the hundred metres', () => {
		expect(page.samples.everyM).toBe(100);
		expect(page.samples.rows.length).toBeGreaterThan(30);
		expect(page.samples.rows.length).toBeLessThan(45);
	});
});

describe('bandRows', () => {
	it('gives each number the room of a target on its line', () => {
		const shares = [0.03, 0.05, 0.06, 0.1, 0.4, 0.45, 0.9];
		const rows = bandRows(shares, 320);
		shares.forEach((share, i) =>
			shares.slice(0, i).forEach((other, j) => {
				if (rows[i] === rows[j]) expect((share - other) * 320).toBeGreaterThanOrEqual(27);
			})
		);
		expect(bandRows([0.1, 0.5, 0.9], 320)).toEqual([0, 0, 0]);
	});
});

describe('linkedGroups', () => {
	/** The example's corners with a chain, and a ledger that says what each costs. */
	function linked(
		links: [number, number][],
		costs: Record<number, number>
	): Pick<ComparisonView, 'corners' | 'comparison'> {
		const corners = view.corners.map((corner): CornerView => {
			const link = links.find(([from]) => from === corner.number);
			return { ...corner, linkedTo: link ? link[1] : null };
		});
		const ledger = view.comparison.ledger.map((row) => ({ ...row, totalS: costs[row.corner] ?? row.totalS }));
		return { corners, comparison: { ...view.comparison, ledger } };
	}

	it('sums what the corners cost and names them in order', () => {
		const [group, ...rest] = linkedGroups(linked([[4, 5]], { 4: 0.312, 5: -0.029 }));
		expect(rest).toEqual([]);
		expect(group.corners.map(({ number }) => number)).toEqual([4, 5]);
		expect(group.total.text).toBe('+0.283\u00a0s\u00a0lost');
	});
	it('gathers a longer chain once, and one over the line from its first corner', () => {
		const groups = linkedGroups(
			linked(
				[
					[2, 3],
					[3, 4],
					[12, 1]
				],
				{}
			)
		);
		expect(groups.map((group) => group.corners.map(({ number }) => number))).toEqual([
			[2, 3, 4],
			[12, 1]
		]);
	});
	it('tells a trade that pays from one that does not', () => {
		const verdict = (costs: Record<number, number>) => linkedGroups(linked([[4, 5]], costs))[0].verdict;
		expect(verdict({ 4: 0.05, 5: -0.12 })).toMatch(/^Time is given away in Tern Hairpin for .+, and that pays\.$/);
		expect(verdict({ 4: 0.2, 5: -0.05 })).toMatch(/and that does not pay\.$/);
		expect(verdict({ 4: -0.05, 5: 0.2 })).toMatch(
			/^Time is gained in Tern Hairpin at the cost of .+, and that does not pay\.$/
		);
		expect(verdict({ 4: 0.1, 5: 0.1 })).toMatch(/^Each costs time by itself/);
		expect(verdict({ 4: 0.001, 5: 0.002 })).toMatch(/^Nothing here/);
	});
	it('carries the largest cause and where it is', () => {
		const [group] = linkedGroups(linked([[4, 5]], { 4: 0.312, 5: -0.029 }));
		expect(group.cause.map(({ text }) => text).join('')).toMatch(/^Tern Hairpin: .+/);
	});
	it('is empty where no corner leads on', () => {
		expect(linkedGroups(linked([], {}))).toEqual([]);
	});
});
