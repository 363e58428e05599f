import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { ReferencePath } from '../../analysis/model.ts';
import { hatchPath } from './hatchPath.ts';
import { keepIndices } from './keepIndices.ts';
import { pathNumbers } from './pathNumbers.ts';
import { pathPoint } from './pathPoint.ts';
import { placeLabel } from './placeLabel.ts';
import { planFrame } from './planFrame.ts';
import { polygonClip } from './polygonClip.ts';
import { ribbonPath } from './ribbonPath.ts';
import { tracePath } from './tracePath.ts';

const finite = fc.double({ min: -500, max: 500, noNaN: true });

describe('keepIndices', () => {
	it('keeps ends and the corner of a bent line, and drops what lies on it', () => {
		expect(keepIndices([0, 1, 2, 3, 4], [0, 1, 2, 1, 0], 0.1)).toEqual([0, 2, 4]);
	});
	it.each([
		{ name: 'nothing', ys: [], expected: [] },
		{ name: 'one point', ys: [4], expected: [0] },
		{ name: 'two points', ys: [4, 9], expected: [0, 1] }
	])('gives back $name', ({ ys, expected }) => {
		expect(
			keepIndices(
				ys.map((_, i) => i),
				ys,
				1
			)
		).toEqual(expected);
	});
	it('leaves no dropped point further from the line than the tolerance', () => {
		fc.assert(
			fc.property(
				fc.array(finite, { minLength: 2, maxLength: 120 }),
				fc.double({ min: 0, max: 20, noNaN: true }),
				(ys, tolerance) => {
					const xs = ys.map((_, i) => i);
					const kept = keepIndices(xs, ys, tolerance);
					for (let k = 1; k < kept.length; k++) {
						const [from, to] = [kept[k - 1], kept[k]];
						for (let i = from; i <= to; i++) {
							const onLine = ys[from] + ((ys[to] - ys[from]) * (i - from)) / (to - from);
							expect(Math.abs(ys[i] - onLine)).toBeLessThanOrEqual(tolerance + 1e-9);
						}
					}
				}
			),
			{ seed: 5, numRuns: 200 }
		);
	});
});

describe('tracePath', () => {
	const draw = (values: number[]): string =>
		tracePath({ placesM: values.map((_, i) => i), values, x: (m) => m * 10, y: (v) => -v });

	it.each([
		{ name: 'an unbroken line', values: [0, 5, 0], path: 'M0 0l10-5 10 5' },
		{ name: 'a gap breaks the line and is never bridged', values: [0, 5, NaN, 7, 9], path: 'M0 0l10-5M30-7l10-2' },
		{ name: 'a gap at either end', values: [NaN, 5, 9, NaN], path: 'M10-5l10-4' },
		{ name: 'a lone sample is a dot', values: [NaN, 5, NaN], path: 'M10-5h0' },
		{ name: 'only gaps draw nothing', values: [NaN, NaN], path: '' },
		{ name: 'nothing draws nothing', values: [], path: '' }
	])('$name', ({ values, path }) => expect(draw(values)).toBe(path));

	it('never holds NaN, and keeps every stretch between gaps', () => {
		fc.assert(
			fc.property(fc.array(fc.oneof(finite, fc.constant(NaN)), { maxLength: 150 }), (values) => {
				const path = draw(values);
				expect(path).not.toMatch(/NaN|Infinity/);
				const stretches = values.filter((v, i) => Number.isFinite(v) && !Number.isFinite(values[i - 1])).length;
				expect((path.match(/M/g) ?? []).length).toBe(stretches);
			}),
			{ seed: 11, numRuns: 300 }
		);
	});
});

describe('hatchPath', () => {
	it('fills the box: a line starts left of it and one ends right of it', () => {
		const d = hatchPath(100, 20, 5);
		expect(d.startsWith('M')).toBe(true);
		expect((d.match(/l/g) ?? []).length).toBeGreaterThanOrEqual(120 / 5);
	});
	it('repeats one command, so that a page of hatches compresses', () => {
		const [, ...steps] = hatchPath(80, 12, 7.4).split('m');
		expect(new Set(steps).size).toBe(1);
	});
	it.each([
		[0, 10, 5],
		[10, -1, 5],
		[10, 10, 0],
		[NaN, 10, 5]
	])('refuses %s × %s at %s', (width, height, pitch) =>
		expect(() => hatchPath(width, height, pitch)).toThrow(RangeError)
	);
});

describe('polygonClip', () => {
	it('closes the area on the level', () => {
		expect(polygonClip([0, 0.5, 1], [0.8, 0.2, 0.8], 0.8)).toBe('polygon(0% 80%,50% 20%,100% 80%,100% 80%,0% 80%)');
	});
});

describe('ribbonPath', () => {
	it('is as wide as asked on a straight', () => {
		const points = [0, 10, 20, 30].map((x) => ({ x, y: 0, width: 2 + x / 5 }));
		const ys = pathNumbers(ribbonPath(points)).map(([, y]) => y);
		expect(Math.max(...ys)).toBe(4);
		expect(Math.min(...ys)).toBe(-4);
	});
	it('encloses an area above zero wherever widths are above zero', () => {
		const point = fc.record({
			step: fc.double({ min: 5, max: 30, noNaN: true }),
			width: fc.double({ min: 4, max: 40, noNaN: true })
		});
		fc.assert(
			fc.property(fc.array(point, { minLength: 2, maxLength: 60 }), (rows) => {
				let x = 0;
				const outline = pathNumbers(ribbonPath(rows.map(({ step, width }) => ({ x: (x += step), y: x / 3, width }))));
				const area = outline.reduce((sum, [ax, ay], i) => {
					const [bx, by] = outline[(i + 1) % outline.length];
					return sum + ax * by - bx * ay;
				}, 0);
				expect(Math.abs(area)).toBeGreaterThan(0);
			}),
			{ seed: 17, numRuns: 100 }
		);
	});
	it('draws nothing of a single point', () => expect(ribbonPath([{ x: 1, y: 1, width: 3 }])).toBe(''));
});

/** A circle of 100.4 m: the closing step is no whole metre. */
function circle(lengthM = 100.4): ReferencePath {
	const radius = lengthM / (2 * Math.PI);
	const n = Math.floor(lengthM) + 1;
	const at = (f: (angle: number) => number): Float64Array =>
		Float64Array.from({ length: n }, (_, i) => radius * f(i / radius));
	return {
		lengthM,
		closed: true,
		xM: at(Math.cos),
		yM: at(Math.sin),
		curvaturePerM: new Float64Array(n).fill(1 / radius),
		origin: 'positions',
		line: 'mark',
		speedKmh: new Float64Array(n).fill(50),
		frame: null
	};
}

describe('pathPoint', () => {
	it('lies on the circle, also across the seam, with the normal towards its middle', () => {
		const path = circle();
		const radius = path.lengthM / (2 * Math.PI);
		for (const s of [0, 0.5, 50.2, 99.9, 100.1, 100.4, 150, -0.3, -99]) {
			const point = pathPoint(path, s);
			expect(Math.hypot(point.x, point.y)).toBeCloseTo(radius, 1);
			expect(point.x * point.normalX + point.y * point.normalY).toBeCloseTo(-radius, 1);
		}
	});
	it('does not care how many laps on a place is counted', () => {
		const path = circle();
		expect(pathPoint(path, 12.3).x).toBeCloseTo(pathPoint(path, 12.3 + 3 * path.lengthM).x, 9);
	});
	it('stops at the ends of an open layout', () => {
		const path = { ...circle(), closed: false };
		expect(pathPoint(path, -20).x).toBe(path.xM[0]);
		expect(pathPoint(path, 500).y).toBe(path.yM[path.yM.length - 1]);
	});
});

describe('planFrame', () => {
	it('puts every point within the padding, whatever the turn', () => {
		const points = fc.array(fc.record({ x: finite, y: finite }), { minLength: 1, maxLength: 40 });
		fc.assert(
			fc.property(points, fc.double({ min: -7, max: 7, noNaN: true }), (given, rotation) => {
				const frame = planFrame({
					points: given,
					rotation,
					widthPx: 300,
					heightPx: [200, 400],
					padding: [10, 20, 30, 40],
					mostPxPerM: 3
				});
				for (const point of given) {
					const [x, y] = frame.place(point.x, point.y);
					expect(x).toBeGreaterThanOrEqual(40 - 0.01);
					expect(x).toBeLessThanOrEqual(280.01);
					expect(y).toBeGreaterThanOrEqual(10 - 0.6);
					expect(y).toBeLessThanOrEqual(frame.heightPx - 30 + 0.6);
				}
				expect(frame.pxPerM).toBeLessThanOrEqual(3);
			}),
			{ seed: 23, numRuns: 200 }
		);
	});
	it('turns the driving direction up', () => {
		const frame = planFrame({
			points: [{ x: 0, y: 0 }],
			rotation: Math.PI / 2,
			widthPx: 10,
			heightPx: [10, 10],
			padding: [0, 0, 0, 0],
			mostPxPerM: 1
		});
		const [x, y] = frame.turn(1, 0);
		expect([Math.round(x), Math.round(y)]).toEqual([0, -1]);
	});
});

describe('placeLabel', () => {
	const frame = { x: 0, y: 0, width: 100, height: 100 };
	const box = (x: number, penalty = 0) => ({ x, y: 10, width: 20, height: 10, penalty });

	it('takes the first choice where nothing is in the way', () => {
		expect(placeLabel([box(10), box(40)], { points: [], boxes: [], frame }).chosen.x).toBe(10);
	});
	it('gives way to a line, then to another label, then to the edge', () => {
		const points = [
			[12, 12],
			[14, 12]
		] as [number, number][];
		expect(placeLabel([box(10), box(40)], { points, boxes: [], frame }).chosen.x).toBe(40);
		expect(placeLabel([box(10), box(40)], { points, boxes: [box(45)], frame }).chosen.x).toBe(10);
		expect(placeLabel([box(-5), box(10)], { points, boxes: [], frame }).chosen.x).toBe(10);
	});
	it('says what the choice covers, so that a label can be left out', () => {
		expect(placeLabel([box(10)], { points: [], boxes: [box(15)], frame }).cost).toBeGreaterThan(7);
	});
});
