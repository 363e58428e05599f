import { describe, expect, it } from 'vitest';
import type { Corner } from '../../schemas/analysisDocument.ts';
import { measureRun } from './measureRun.ts';
import { cornersOf, readClosedForm, sampleRun } from './testing/closedForm.ts';
import { cornerAt, placedOf, placeOnCourse } from './testing/placedOf.ts';

type Knots = [number, number][];

/** two corners, apexes at 5 s and 9 s; speed falls through the first to the second */
const speedKmh: Knots = [
	[0, 200],
	[3, 200],
	[5, 160],
	[8.5, 80],
	[10, 80],
	[14, 160]
];
const at = (timeS: number) => placeOnCourse(speedKmh, timeS);
const corners = [cornerAt(at(4), at(5), at(6)), cornerAt(at(8), at(9), at(10), { number: 2 })];

function brakedBy(brakePct: Knots, throttlePct: Knots = [[0, 0]], list: Corner[] = corners) {
	const run = placedOf({ lengthS: 14, rateHz: 100, speedKmh, brakePct, throttlePct });
	return measureRun(run, list).metrics.map((m) => ({ corner: m.corner, onsetS: m.onsetS, dabs: m.dabs }));
}

describe('the braking of a corner', () => {
	it('is the one that is mostly over at its apex, trailed past it or not', () => {
		const [first, second] = brakedBy([
			[0, 0],
			[3.5, 0],
			[3.6, 80],
			[4.2, 80],
			[5.6, 0]
		]);
		expect(first.onsetS).toBeCloseTo(3.506, 2);
		expect(second.onsetS).toBeNull();
	});

	it('belongs to the corner behind where it begins in a bend and mostly follows it', () => {
		const [first, second] = brakedBy([
			[0, 0],
			[4.8, 0],
			[4.9, 70],
			[8, 70],
			[8.6, 0]
		]);
		expect(first.onsetS).toBeNull();
		expect(second.onsetS).toBeCloseTo(4.807, 2);
	});

	it('runs from the first to the last of several for one corner', () => {
		const twice: Knots = [
			[0, 0],
			[6.2, 0],
			[6.3, 60],
			[6.8, 60],
			[6.9, 0],
			[7.6, 0],
			[7.7, 60],
			[8.4, 60],
			[8.6, 0]
		];
		const [, second] = brakedBy(twice);
		expect(second.onsetS).toBeCloseTo(6.208, 2);
		expect(second.dabs).toBe(1);
	});

	it('is not one that is followed by full throttle', () => {
		const twice: Knots = [
			[0, 0],
			[0.5, 0],
			[0.6, 60],
			[1, 60],
			[1.1, 0],
			[3.5, 0],
			[3.6, 60],
			[4.4, 60],
			[4.6, 0]
		];
		const [first] = brakedBy(twice, [
			[0, 0],
			[1.3, 0],
			[1.5, 100],
			[3.2, 100],
			[3.3, 0]
		]);
		expect(first.onsetS).toBeCloseTo(3.508, 2);
		expect(first.dabs).toBe(0);
	});

	it('ignores a touch of the pedal beside a real braking', () => {
		const [first] = brakedBy([
			[0, 0],
			[1, 0],
			[1.05, 12],
			[1.1, 0],
			[3.5, 0],
			[3.6, 80],
			[4.4, 80],
			[4.6, 0]
		]);
		expect(first.onsetS).toBeCloseTo(3.506, 2);
		expect(first.dabs).toBe(1);
	});

	it('skips kinks, which have no metrics', () => {
		const list = [{ ...corners[0], number: null }, corners[1]];
		const metrics = brakedBy(
			[
				[0, 0],
				[3.5, 0],
				[3.6, 80],
				[4.2, 80],
				[5.6, 0]
			],
			[[0, 0]],
			list
		);
		expect(metrics.map((m) => m.corner)).toEqual([2]);
	});
});

describe('a corner that the line cuts', () => {
	const truth = readClosedForm();
	// the closed form's line is moved 320 m on, into the first corner: places there are 320 m less, and the corner spans the line
	const shift = 320;
	const moved = cornersOf(truth).map((corner) => ({
		...corner,
		startM: (corner.startM - shift + truth.length_m) % truth.length_m,
		apexM: (corner.apexM - shift + truth.length_m) % truth.length_m,
		endM: (corner.endM - shift + truth.length_m) % truth.length_m
	}));
	const run = sampleRun(truth, { rateHz: 60, phase: 0.3, laps: ['ref', 'ref', 'ref'] });
	const shifted = {
		...run,
		placeM: run.placeM.map((place) => place - shift),
		laps: run.laps.slice(0, 2).map((lap) => ({ ...lap, startS: lap.startS + 6, endS: lap.endS + 6 }))
	};

	it('is measured on the run as it went on, with places that do not jump at the line', () => {
		const plain = measureRun(run, cornersOf(truth)).metrics.find((m) => m.lap === 2 && m.corner === 1);
		const { metrics } = measureRun(shifted, moved);
		const spanning = metrics.find((m) => m.lap === 1 && m.corner === 1);
		const later = metrics.find((m) => m.lap === 2 && m.corner === 1);
		expect(moved[0].startM).toBeGreaterThan(moved[0].endM);
		expect(metrics).toHaveLength(18);
		// its apex lies 4 m behind the line: the braking of lap 2's passage lies before it, below 0
		expect(later?.onsetM).toBeCloseTo((plain?.onsetM ?? NaN) - shift, 1);
		expect(later?.minKmh).toBeCloseTo(plain?.minKmh ?? NaN, 6);
		expect(later?.timeS).toBeCloseTo(plain?.timeS ?? NaN, 3);
		expect(spanning?.timeS).toBeCloseTo(plain?.timeS ?? NaN, 3);
	});
});
