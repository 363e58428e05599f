import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { stretchFigures, type StretchColumns } from './stretchFigures';

const columns = (changes: Partial<StretchColumns['driver']> = {}): StretchColumns => {
	const along = (of: (i: number) => number): Float64Array => Float64Array.from({ length: 101 }, (_, i) => of(i));
	const base = {
		brake: along((i) => i),
		speed: along(() => 100),
		throttle: along(() => 0),
		steering: null
	};
	return {
		fromM: 400,
		driver: { ...base, ...changes },
		reference: base,
		apartS: along((i) => (i * i) / 1e5)
	};
};
const row = (figures: ReturnType<typeof stretchFigures>, key: string) => figures?.rows.find((r) => r.key === key);

describe('stretchFigures', () => {
	it('gives the time of the stretch alone', () => {
		expect(stretchFigures(columns(), [420, 470])?.deltaS).toBeCloseTo((70 * 70 - 20 * 20) / 1e5, 12);
	});
	it('does not care which end came first', () => {
		expect(stretchFigures(columns(), [470, 420])).toEqual(stretchFigures(columns(), [420, 470]));
	});
	it('takes mean and extremes of a ramp', () => {
		expect(row(stretchFigures(columns(), [420, 470]), 'brake')?.driver).toEqual({
			mean: 45,
			lowest: 20,
			highest: 70,
			hasGap: false
		});
	});
	it('takes mean speed as metres by time, not as the middle of the figures', () => {
		// 50 m at 50 km/h and 50 m at 100 km/h take as long as 100 m at 66.7 km/h: the arithmetic mean would say 75.
		const speed = Float64Array.from({ length: 101 }, (_, i) => (i <= 50 ? 50 : 100));
		const mean = row(stretchFigures(columns({ speed }), [400, 500]), 'speed')?.driver?.mean ?? NaN;
		expect(mean).toBeGreaterThan(66);
		expect(mean).toBeLessThan(67.4);
	});
	it('leaves a gap out and says so', () => {
		const brake = Float64Array.from({ length: 101 }, (_, i) => (i > 30 && i < 40 ? NaN : 10));
		expect(row(stretchFigures(columns({ brake }), [420, 470]), 'brake')?.driver).toEqual({
			mean: 10,
			lowest: 10,
			highest: 10,
			hasGap: true
		});
		const lost = Float64Array.from({ length: 101 }, () => NaN);
		expect(row(stretchFigures(columns({ brake: lost }), [420, 470]), 'brake')?.driver).toBeNull();
	});
	it('is null for an absent channel and for a stretch without length', () => {
		expect(row(stretchFigures(columns(), [420, 470]), 'steering')?.driver).toBeNull();
		expect(stretchFigures(columns(), [420.2, 419.9])).toBeNull();
	});
	it('has no time where an end is in a gap', () => {
		const gap = columns();
		gap.apartS = Array.from(gap.apartS, (value, i) => (i === 20 ? NaN : value));
		expect(stretchFigures(gap, [420, 470])?.deltaS).toBeNull();
		expect(stretchFigures(gap, [421, 470])?.deltaS).not.toBeNull();
	});
	it('adds up: two neighbouring stretches cost what the whole costs, and the mean lies between the extremes', () => {
		fc.assert(
			fc.property(fc.array(fc.integer({ min: 400, max: 500 }), { minLength: 3, maxLength: 3 }), (places) => {
				const [a, b, c] = [...new Set(places)].sort((x, y) => x - y);
				if (c === undefined) return;
				const of = (from: number, to: number) => stretchFigures(columns(), [from, to]);
				expect((of(a, b)?.deltaS ?? NaN) + (of(b, c)?.deltaS ?? NaN)).toBeCloseTo(of(a, c)?.deltaS ?? NaN, 9);
				const side = row(of(a, c), 'brake')?.driver;
				expect(side && side.mean >= side.lowest && side.mean <= side.highest).toBe(true);
			})
		);
	});
});
