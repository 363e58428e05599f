import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { seededNormal } from '../metrics/testing/seededNormal.ts';
import { smoothNoisy } from './smoothNoisy.ts';
import { smoothScattered } from './smoothScattered.ts';

/** Slow, obvious oracle: the normal equations as a full matrix, solved by Gauss with pivots. */
function fullSolution(
	at: number[],
	values: number[],
	weights: number[],
	nodes: number,
	lambda: number,
	closed: boolean
) {
	const matrix = Array.from({ length: nodes }, () => new Array<number>(nodes + 1).fill(0));
	const node = (i: number) => (closed ? ((i % nodes) + nodes) % nodes : i);
	at.forEach((u, j) => {
		const first = closed ? Math.floor(u) - 1 : Math.max(0, Math.min(nodes - 4, Math.floor(u) - 1));
		const shares = [0, 1, 2, 3].map((k) =>
			[0, 1, 2, 3].filter((m) => m !== k).reduce((product, m) => (product * (u - first - m)) / (k - m), 1)
		);
		shares.forEach((a, k) => {
			shares.forEach((b, m) => (matrix[node(first + k)][node(first + m)] += weights[j] * a * b));
			matrix[node(first + k)][nodes] += weights[j] * a * values[j];
		});
	});
	const third = [-1, 3, -3, 1];
	for (let row = 0; row < (closed ? nodes : nodes - 3); row++) {
		third.forEach((a, k) => third.forEach((b, m) => (matrix[node(row + k)][node(row + m)] += lambda * a * b)));
	}
	for (let i = 0; i < nodes; i++) {
		let pivot = i;
		for (let r = i; r < nodes; r++) if (Math.abs(matrix[r][i]) > Math.abs(matrix[pivot][i])) pivot = r;
		[matrix[i], matrix[pivot]] = [matrix[pivot], matrix[i]];
		for (let r = 0; r < nodes; r++) {
			if (r === i) continue;
			const factor = matrix[r][i] / matrix[i][i];
			for (let c = i; c <= nodes; c++) matrix[r][c] -= factor * matrix[i][c];
		}
	}
	return matrix.map((row, i) => row[nodes] / row[i]);
}

describe('smoothScattered', () => {
	it.each([true, false])('solves what the full normal equations say (closed: %s)', (closed) => {
		const nodes = 60;
		const normal = seededNormal(4);
		const at = Array.from({ length: 150 }, (_, j) => ((j * 0.731) % (nodes - 1)) + 0.01);
		const values = at.map((u) => Math.sin((2 * Math.PI * u) / nodes) + 0.1 * normal());
		const weights = at.map((_, j) => 0.5 + (j % 3));
		const lambda = 20;
		const [fast] = smoothScattered(Float64Array.from(at), [Float64Array.from(values)], Float64Array.from(weights), {
			nodes,
			lambda,
			closed
		});
		const slow = fullSolution(at, values, weights, nodes, lambda, closed);
		// the closed grid is solved with overlapping ends
		slow.forEach((value, i) => expect(fast[i]).toBeCloseTo(value, closed ? 4 : 8));
	});

	it('leaves parabolas as they are, however strong, and bridges gaps in them', () => {
		const coefficient = fc.double({ min: -2, max: 2, noNaN: true });
		fc.assert(
			fc.property(coefficient, coefficient, coefficient, fc.integer({ min: 0, max: 6 }), (a, b, c, power) => {
				const at = Float64Array.from({ length: 80 }, (_, j) => j * 0.5).filter((u) => u < 12 || u > 20);
				const parabola = (u: number) => a + b * u + (c * u * u) / 20;
				const options = { nodes: 40, lambda: 10 ** power, closed: false };
				const [z] = smoothScattered(at, [at.map(parabola)], null, options);
				z.forEach((value, i) => expect(value).toBeCloseTo(parabola(i), 5));
			}),
			{ seed: 11, numRuns: 50 }
		);
	});

	it('keeps slow waves and takes out quick ones', () => {
		const nodes = 400;
		const cut = (2 * Math.PI) / 20;
		const at = Float64Array.from({ length: nodes }, (_, i) => i);
		const amplitude = (wavelength: number) => {
			const wave = at.map((u) => Math.sin((2 * Math.PI * u) / wavelength));
			const [z] = smoothScattered(at, [wave], null, { nodes, lambda: 1 / cut ** 6, closed: true });
			return Math.max(...z);
		};
		expect(amplitude(50)).toBeGreaterThan(0.98);
		expect(amplitude(20)).toBeCloseTo(0.5, 1);
		expect(amplitude(8)).toBeLessThan(0.02);
	});

	it('refuses grids and penalties that mean nothing', () => {
		const none = new Float64Array(0);
		expect(() => smoothScattered(none, [none], null, { nodes: 7, lambda: 1, closed: true })).toThrow(RangeError);
		expect(() => smoothScattered(none, [none], null, { nodes: 9, lambda: NaN, closed: true })).toThrow(RangeError);
	});
});

describe('smoothNoisy', () => {
	it('comes much nearer to a slow drift than the noise, and follows a quick one', () => {
		const normal = seededNormal(9);
		const timeS = Float64Array.from({ length: 3000 }, (_, j) => j / 20);
		const rms = (periodS: number) => {
			const truth = timeS.map((t) => Math.sin((2 * Math.PI * t) / periodS));
			const noisy = truth.map((value) => value + 0.3 * normal());
			const smooth = smoothNoisy(timeS, noisy, [1.5, 3, 6, 12]);
			return Math.sqrt(smooth.reduce((sum, value, j) => sum + (value - truth[j]) ** 2, 0) / truth.length);
		};
		expect(rms(60)).toBeLessThan(0.03);
		expect(rms(5)).toBeLessThan(0.1);
	});

	it('leaves too few values alone', () => {
		const values = Float64Array.of(1, 5, NaN, 2);
		expect(smoothNoisy(Float64Array.of(0, 1, 2, 3), values, [2])).toEqual(values);
	});
});
