import { describe, expect, it } from 'vitest';
import { curvatureOf, fitEvenLine } from './evenLine.ts';
import { cornerElements, straight, symmetricCircuit } from './testing/madeUpCircuit.ts';

/** Points every so many metres of a made-up circuit, with their places. */
function pointsOf(circuit: ReturnType<typeof symmetricCircuit>, stepM: number) {
	const atM = Float64Array.from({ length: Math.floor(circuit.lengthM / stepM) }, (_, i) => i * stepM);
	const points = Array.from(atM, (place) => circuit.at(place));
	const xM = Float64Array.from(points, (point) => point.xM);
	const yM = Float64Array.from(points, (point) => point.yM);
	return { atM, xM, yM, weights: null, lengthM: circuit.lengthM, closed: true };
}

describe('fitEvenLine', () => {
	it('measures the length and the radius of a circle', () => {
		const circle = symmetricCircuit([[(Math.PI * 120) / 2, 1 / 120, 1 / 120]], 4);
		const line = fitEvenLine(pointsOf(circle, 0.7), 50);
		expect(line.lengthM).toBeCloseTo(2 * Math.PI * 120, 2);
		for (const bend of curvatureOf(line)) expect(1 / bend).toBeCloseTo(120, 1);
	});

	it('keeps the ramps between straights and arcs', () => {
		const circuit = symmetricCircuit(
			[straight(120), ...cornerElements(-120, 30, 24), straight(80), ...cornerElements(30, 60, 20)],
			4
		);
		const line = fitEvenLine(pointsOf(circuit, 0.9), 50);
		const bends = curvatureOf(line);
		let squares = 0;
		bends.forEach((bend, i) => (squares += (bend - circuit.at(i * line.stepM).curvaturePerM) ** 2));
		expect(Math.sqrt(squares / bends.length)).toBeLessThan(4e-4);
	});

	it('finds the same shape from places that are only roughly known', () => {
		const circuit = symmetricCircuit([straight(150), ...cornerElements(90, 40, 25)], 4);
		const points = pointsOf(circuit, 0.9);
		const rough = points.atM.map((place) => place * 1.01 + 3 * Math.sin(place / 70));
		const line = fitEvenLine({ ...points, atM: rough, lengthM: circuit.lengthM * 1.01 }, 50);
		expect(line.lengthM).toBeCloseTo(circuit.lengthM, 0);
	});
});
