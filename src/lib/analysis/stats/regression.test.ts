import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { gunzipSync } from 'node:zlib';
import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { seededNormal } from '../metrics/testing/seededNormal.ts';
import { fitCurve } from './fitCurve.ts';
import { fitLine } from './fitLine.ts';
import { leastSquares } from './leastSquares.ts';
import { studentTQuantile } from './studentT.ts';

const fixture = (name: string) =>
	gunzipSync(
		readFileSync(fileURLToPath(new URL(`../../../../fixtures/regression/${name}.gz`, import.meta.url)))
	).toString();
const columnsOf = (name: string): number[][] => {
	const [head, ...rows] = fixture(name).trim().split('\n');
	return head.split(',').map((_, column) => rows.map((row) => Number(row.split(',')[column])));
};
const certifiedSchema = z.object({
	certified: z.object({ b: z.array(z.number()), se: z.array(z.number()), residual_sd: z.number() })
});
const truth = z.object({ norris: certifiedSchema, longley: certifiedSchema }).parse(JSON.parse(fixture('truth.json')));
const ones = (n: number) => new Array<number>(n).fill(1);
/** worst relative difference */
const worst = (actual: ArrayLike<number>, expected: readonly number[]) =>
	Math.max(...expected.map((value, i) => Math.abs(actual[i] / value - 1)));

describe('leastSquares', () => {
	it('gives the certified values of NIST StRD Norris to 9 significant digits', () => {
		const [x, y] = columnsOf('norris.csv');
		const { b, se, residual_sd } = truth.norris.certified;
		const fit = leastSquares([ones(x.length), x], y);
		expect(worst(fit?.coefficients ?? [], b)).toBeLessThan(5e-10);
		expect(worst(fit?.standardErrors ?? [], se)).toBeLessThan(5e-10);
		expect(fit?.residualSd).toBeCloseTo(residual_sd, 9);
		const line = fitLine(x, y);
		expect(worst([line?.intercept ?? NaN, line?.slope ?? NaN], b)).toBeLessThan(5e-10);
		expect(line?.slopeSe).toBeCloseTo(se[1], 12);
	});

	it('gives the certified values of NIST StRD Longley to 7 significant digits', () => {
		const [y, ...x] = columnsOf('longley.csv');
		const { b, se, residual_sd } = truth.longley.certified;
		const fit = leastSquares([ones(y.length), ...x], y);
		const off = [worst(fit?.coefficients ?? [], b), worst(fit?.standardErrors ?? [], se)];
		console.log(
			`Longley, worst relative error: coefficients ${off[0].toExponential(1)}, errors ${off[1].toExponential(1)}`
		);
		expect(Math.max(...off)).toBeLessThan(5e-8);
		expect((fit?.residualSd ?? NaN) / residual_sd).toBeCloseTo(1, 7);
	});

	it('says nothing where columns depend on each other, or rows are too few', () => {
		expect(leastSquares([ones(4), [2, 2, 2, 2]], [1, 2, 3, 4])).toBeNull();
		expect(leastSquares([ones(1), [1]], [1])).toBeNull();
	});

	it('leaves what it was given as it was', () => {
		const columns = [ones(3), [1, 2, 4]];
		leastSquares(columns, [1, 2, 3]);
		expect(columns).toEqual([ones(3), [1, 2, 4]]);
	});
});

describe('studentTQuantile', () => {
	it.each([
		// handbook table of Student's t (from memory)
		{ share: 0.975, df: 1, expected: 12.7062047364 },
		{ share: 0.975, df: 2, expected: 4.3026527297 },
		{ share: 0.975, df: 10, expected: 2.228138852 },
		{ share: 0.975, df: 20, expected: 2.0859634473 },
		{ share: 0.95, df: 5, expected: 2.0150483727 },
		{ share: 0.025, df: 10, expected: -2.228138852 }
	])('is $expected for $share with $df degrees of freedom', ({ share, df, expected }) => {
		expect(studentTQuantile(share, df)).toBeCloseTo(expected, 8);
	});

	it('has closed forms for one and two degrees of freedom', () => {
		fc.assert(
			fc.property(fc.double({ min: 0.5001, max: 0.9999, noNaN: true }), (share) => {
				const cauchy = Math.tan(Math.PI * (share - 0.5));
				const two = (2 * share - 1) * Math.sqrt(2 / (4 * share * (1 - share)));
				expect(studentTQuantile(share, 1) / cauchy).toBeCloseTo(1, 8);
				expect(studentTQuantile(share, 2) / two).toBeCloseTo(1, 8);
			}),
			{ seed: 4, numRuns: 200 }
		);
	});
});

describe('fitLine', () => {
	it('covers the true slope with its 95 % interval in 93 to 97 of 100 simulated stints', () => {
		const normal = seededNormal(20);
		let covered = 0;
		const runs = 2000;
		for (let run = 0; run < runs; run++) {
			const x = Array.from({ length: 5 + (run % 20) }, (_, i) => i + 1);
			const fit = fitLine(
				x,
				x.map((lap) => 90 + 0.04 * lap + 0.1 * normal())
			);
			if (fit && fit.slopeCi95[0] <= 0.04 && fit.slopeCi95[1] >= 0.04) covered++;
		}
		console.log(`95 % interval of a slope: covers in ${((100 * covered) / runs).toFixed(1)} % of ${runs}`);
		expect(covered / runs).toBeGreaterThanOrEqual(0.93);
		expect(covered / runs).toBeLessThanOrEqual(0.97);
	});

	it('needs three points, and two different x', () => {
		expect(fitLine([1, 2], [3, 4])).toBeNull();
		expect(fitLine([2, 2, 2], [3, 4, 5])).toBeNull();
	});
});

describe('fitCurve', () => {
	const x = Array.from({ length: 40 }, (_, i) => i / 20);
	const y = x.map((at) => 3 * Math.exp(-1.7 * at));
	const residuals = ([size, rate]: readonly number[]) =>
		Float64Array.from(x, (at, i) => size * Math.exp(-rate * at) - y[i]);

	it('finds the parameters of an exact curve', () => {
		const fit = fitCurve(residuals, [
			{ start: 1, least: 0, most: 10 },
			{ start: 0.5, least: 0, most: 10 }
		]);
		expect(fit.values[0]).toBeCloseTo(3, 7);
		expect(fit.values[1]).toBeCloseTo(1.7, 7);
	});

	it('stays within borders, and leaves alone what is fixed', () => {
		const fit = fitCurve(residuals, [
			{ start: 1, least: 0, most: 2 },
			{ start: 1.5, least: 0, most: 10, fixed: true }
		]);
		expect(fit.values).toEqual([2, 1.5]);
		expect(fit.standardErrors).toEqual([NaN, NaN]);
	});
});
