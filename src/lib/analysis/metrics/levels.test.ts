import fc from 'fast-check';
import { describe, expect, it, vi } from 'vitest';
import { crossing } from './crossing.ts';
import { idleGap } from './idleGap.ts';
import { heldLevel } from './heldLevel.ts';
import { noiseLevel } from './noiseLevel.ts';
import { minimumSpeed, speedAt, speedTrace } from './steadySpeed.ts';
import { placedOf } from './testing/placedOf.ts';
import { seededNormal } from './testing/seededNormal.ts';
import { turnIn } from './turnIn.ts';

type Knots = [number, number][];

// hundreds of runs a property; a busy machine needs more than the usual five seconds
vi.setConfig({ testTimeout: 60_000 });

describe('crossing', () => {
	it.each([
		{
			name: 'draws the foot of a ramp back into the interval',
			values: [0, 0, 25, 60, 95],
			level: 5,
			expected: 0.2 - 20 / 350
		},
		{ name: 'draws the end of a ramp on into the interval', values: [80, 50, 20, 0, 0], level: 2, expected: 0.26 },
		{ name: 'is straight between two samples of a ramp', values: [0, 10, 30, 50, 70], level: 20, expected: 0.15 },
		{
			name: 'takes the middle of a stroke that lies between two samples',
			values: [0, 0, 100, 100, 100],
			level: 50,
			expected: 0.15
		}
	])('$name', ({ values, level, expected }) => {
		const timeS = Float64Array.from(values, (_, i) => i / 10);
		const i = values.findIndex((value, k) => (value - level) * (values[k + 1] - level) <= 0);
		expect(crossing({ timeS, values: Float64Array.from(values), noise: 0 }, i, level).timeS).toBeCloseTo(expected, 9);
	});

	it('never leaves the interval, whatever the signal', () => {
		fc.assert(
			fc.property(
				fc.array(fc.double({ min: 0, max: 100, noNaN: true }), { minLength: 6, maxLength: 6 }),
				fc.double({ min: 0.001, max: 99.9, noNaN: true }),
				(list, level) => {
					const values = Float64Array.from(list);
					const timeS = values.map((_, i) => i / 10);
					for (let i = 0; i < 5; i++) {
						if (values[i] < level === values[i + 1] < level) continue;
						const { timeS: atS, plusMinusS } = crossing({ timeS, values, noise: 0 }, i, level);
						expect(atS).toBeGreaterThanOrEqual(timeS[i] - 1e-12);
						expect(atS).toBeLessThanOrEqual(timeS[i + 1] + 1e-12);
						expect(plusMinusS).toBeGreaterThanOrEqual(0);
					}
				}
			),
			{ numRuns: 500, seed: 31 }
		);
	});
});

describe('heldLevel', () => {
	it('is the highest level that a trapezoid holds, by its closed form', () => {
		fc.assert(
			fc.property(
				fc.double({ min: 0, max: 0.2, noNaN: true }),
				fc.double({ min: 0.05, max: 0.3, noNaN: true }),
				(plateauS, rampS) => {
					const timeS = Float64Array.from({ length: 4000 }, (_, i) => i / 4000);
					const values = timeS.map((t) => {
						const outside = Math.max(0, Math.abs(t - 0.5) - plateauS / 2);
						return Math.max(0, 100 * (1 - outside / rampS));
					});
					const expected = 100 * (1 - Math.max(0, 0.05 - plateauS) / 2 / rampS);
					expect(heldLevel({ timeS, values, noise: 0 }, 0, 3999, 0.05, 1 / 4000)).toBeCloseTo(expected, -0.5);
				}
			),
			{ numRuns: 60, seed: 32 }
		);
	});
});

describe('speed', () => {
	const speedKmh: Knots = [
		[0, 150],
		[2, 70],
		[4, 70],
		[8, 150]
	];
	const normal = seededNormal(9);

	it('is read between the samples', () => {
		const trace = speedTrace(placedOf({ lengthS: 8, rateHz: 10, phase: 0.4, speedKmh }));
		expect(speedAt(trace, 1)).toBeCloseTo(110, 9);
		expect(speedAt(trace, 20)).toBeNaN();
	});

	it('has its noise measured', () => {
		const trace = speedTrace(placedOf({ lengthS: 8, rateHz: 60, speedKmh, speedNoise: () => 0.3 * normal() }));
		expect(trace.noiseKmh).toBeGreaterThan(0.24);
		expect(trace.noiseKmh).toBeLessThan(0.37);
		expect(noiseLevel(Float64Array.from([1, 2, 3]))).toBe(0);
	});

	it('finds a flat minimum through noise to 0.25 km/h, and its middle', () => {
		const errors = Array.from({ length: 60 }, () => {
			const trace = speedTrace(placedOf({ lengthS: 8, rateHz: 60, speedKmh, speedNoise: () => 0.3 * normal() }));
			const minimum = minimumSpeed(trace, 1, 6);
			expect(minimum?.timeS).toBeGreaterThan(1.9);
			expect(minimum?.timeS).toBeLessThan(4.1);
			return Math.abs((minimum?.kmh ?? NaN) - 70);
		}).sort((a, b) => a - b);
		expect(errors[56]).toBeLessThan(0.25);
	});

	it('finds a sharp minimum between the samples', () => {
		const sharp: Knots = [
			[0, 150],
			[2, 70],
			[6, 150]
		];
		for (let k = 0; k < 10; k++) {
			const trace = speedTrace(placedOf({ lengthS: 6, rateHz: 10, phase: k / 10, speedKmh: sharp }));
			expect(minimumSpeed(trace, 0.5, 5)?.kmh).toBeCloseTo(70, 1);
		}
	});

	it('averages a sharp minimum (60 km/h per s from fall to rise) by no more than its noise asks for', () => {
		const sharp: Knots = [
			[0, 150],
			[2, 70],
			[6, 150]
		];
		const errors = Array.from({ length: 60 }, () => {
			const trace = speedTrace(placedOf({ lengthS: 6, rateHz: 60, speedKmh: sharp, speedNoise: () => 0.3 * normal() }));
			return Math.abs((minimumSpeed(trace, 0.5, 5)?.kmh ?? NaN) - 70);
		}).sort((a, b) => a - b);
		expect(errors[56]).toBeLessThan(1.3);
	});

	it('takes the end of the corner where the car only slows through it', () => {
		const trace = speedTrace(placedOf({ lengthS: 8, rateHz: 20, speedKmh }));
		expect(minimumSpeed(trace, 0.5, 1.23)).toMatchObject({ kmh: 150 - 1.23 * 40, timeS: 1.23 });
		expect(minimumSpeed(trace, 7, 9)).not.toBeNull();
		expect(minimumSpeed(trace, NaN, 9)).toBeNull();
	});
});

describe('turnIn', () => {
	const timeS = Float64Array.from({ length: 500 }, (_, i) => i / 50);
	const span = { notBeforeS: -Infinity, startS: 4, apexS: 5, endS: 6.5 };
	const steering = (course: (t: number) => number) => ({ timeS, values: timeS.map(course), noise: 0 });
	const ramp = (t: number, from: number, to: number) => Math.min(Math.max((t - from) / (to - from), 0), 1);

	it('is the foot of the turn', () => {
		expect(
			turnIn(
				steering((t) => 40 * (ramp(t, 4, 5) - ramp(t, 5.5, 6.5))),
				1,
				span
			)
		).toBeCloseTo(4, 2);
	});

	it('is not the waggle before it that comes back', () => {
		const waggle = (t: number) => (t > 3.2 && t < 3.5 ? 8 : 0) + 40 * (ramp(t, 4, 5) - ramp(t, 5.5, 6.5));
		expect(turnIn(steering(waggle), 1, span)).toBeCloseTo(4, 1);
	});

	it('counts from straight where the car comes out of an opposite corner', () => {
		const chicane = (t: number) => -30 * (1 - ramp(t, 3, 4)) + 40 * (ramp(t, 4, 5) - ramp(t, 5.5, 6.5));
		expect(turnIn(steering(chicane), 1, { ...span, notBeforeS: 2.8 })).toBeCloseTo(4, 1);
	});

	it('works for a right corner, and is not known for a signal that does not turn', () => {
		expect(
			turnIn(
				steering((t) => -40 * (ramp(t, 4, 5) - ramp(t, 5.5, 6.5))),
				-1,
				span
			)
		).toBeCloseTo(4, 2);
		expect(
			turnIn(
				steering(() => 0),
				1,
				span
			)
		).toBeNull();
		expect(
			turnIn(
				steering(() => NaN),
				1,
				span
			)
		).toBeNull();
	});
});

describe('idleGap', () => {
	const model = {
		coefficients: [4, 0, 0] as [number, number, number],
		fromKmh: 20,
		toKmh: 200,
		residualMps2: 0,
		samples: 100,
		from: 'throttle' as const
	};
	const curvaturePerM: Knots = [
		[0, 0.03],
		[1, 0.03],
		[1.2, 0],
		[2.4, 0],
		[2.6, -0.03],
		[4, -0.03]
	];
	const run = (speedKmh: Knots) => placedOf({ lengthS: 4, rateHz: 50, phase: 0.2, speedKmh, curvaturePerM });
	const span = { startS: 0.5, endS: 3.5 };
	// 0.03 1/m · (18 m/s)² = 9.7 m/s²: below 2 m/s² for 0.041 s of each ramp of 0.2 s
	const turningShareS = 2 * 0.2 * (2 / (0.03 * 18 * 18));

	it('is the time in which the car neither turns, brakes nor accelerates hard', () => {
		expect(idleGap(run([[0, 64.8]]), span, [], model)).toBeCloseTo(1.2 + turningShareS, 2);
	});

	it('leaves out braking and hard acceleration', () => {
		expect(idleGap(run([[0, 64.8]]), span, [{ startS: 1.3, endS: 1.8 }], model)).toBeCloseTo(0.7 + turningShareS, 2);
		expect(
			idleGap(
				run([
					[0, 50],
					[4, 50 + 4 * 3 * 3.6]
				]),
				span,
				[],
				model
			)
		).toBe(0);
	});

	it('is not known without the curvature of the car’s own line', () => {
		expect(idleGap({ ...run([[0, 64.8]]), curvaturePerM: null }, span, [], model)).toBeNull();
	});
});
