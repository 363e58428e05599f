import { describe, expect, it } from 'vitest';
import { channelsOf } from '../metrics/testing/channelsOf.ts';
import { fitFullThrottle, fullThrottleAcceleration } from './fullThrottle.ts';

/** Full-throttle runs from 10 m/s up by a(v), each ended by a lift; explicit midpoint steps at 1 kHz, sampled at the given rate. */
function accelerating(
	acceleration: (speedMps: number) => number,
	options: { rateHz?: number; topMps?: number; runs?: number; limiterS?: number } = {}
) {
	const { rateHz = 50, topMps = 60, runs = 3, limiterS = 0 } = options;
	const timeS: number[] = [];
	const speedKmh: number[] = [];
	const throttlePct: number[] = [];
	const push = (v: number, throttle: number) => {
		timeS.push(timeS.length / rateHz);
		speedKmh.push(v * 3.6);
		throttlePct.push(throttle);
	};
	for (let run = 0; run < runs; run++) {
		let v = 10 + run;
		while (v < topMps && acceleration(v) > 0.1) {
			push(v, 100);
			for (let ms = 0; ms < 1000 / rateHz; ms++) v += acceleration(v + acceleration(v) / 2000) / 1000;
		}
		for (let k = 0; k < limiterS * rateHz; k++) push(topMps, 100);
		while (v > 10) {
			push(v, 0);
			v -= 10 / rateHz;
		}
	}
	return channelsOf({ timeS, speedKmh, throttlePct });
}

describe('fitFullThrottle', () => {
	it('finds the curve of a car with power and drag', () => {
		const truth = (v: number) => 9 - 0.12 * v - 0.0006 * v * v;
		const model = fitFullThrottle(accelerating(truth));
		expect(model).not.toBeNull();
		for (let v = 15; v <= 52; v += 1) {
			expect(Math.abs(fullThrottleAcceleration(model!, v * 3.6) - truth(v))).toBeLessThan(0.12);
		}
	});

	it('is not pulled down by a limiter at top speed', () => {
		const model = fitFullThrottle(accelerating(() => 3.6, { limiterS: 4 }));
		for (let v = 15; v <= 55; v += 5) expect(fullThrottleAcceleration(model!, v * 3.6)).toBeCloseTo(3.6, 1);
	});

	it('holds the end value outside the speeds it has seen and never goes below zero', () => {
		const model = fitFullThrottle(accelerating((v) => 6 - 0.09 * v, { topMps: 50 }))!;
		expect(fullThrottleAcceleration(model, 400)).toBe(fullThrottleAcceleration(model, model.toKmh));
		expect(fullThrottleAcceleration(model, 0)).toBe(fullThrottleAcceleration(model, model.fromKmh));
		expect(fullThrottleAcceleration({ ...model, coefficients: [-1, 0, 0] }, 100)).toBe(0);
	});

	it('says nothing of a run without full throttle', () => {
		const timeS = Array.from({ length: 500 }, (_, i) => i / 50);
		const run = channelsOf({ timeS, speedKmh: timeS.map(() => 80), throttlePct: timeS.map(() => 30) });
		expect(fitFullThrottle(run)).toBeNull();
	});

	it('takes the strongest accelerations where there is no throttle channel', () => {
		const run = accelerating((v) => 6 - 0.09 * v, { topMps: 50 });
		const model = fitFullThrottle({ ...run, throttlePct: null })!;
		expect(model.from).toBe('envelope');
		expect(Math.abs(fullThrottleAcceleration(model, 108) - 3.3)).toBeLessThan(0.4);
	});

	it('survives storage as JSON', () => {
		const model = fitFullThrottle(accelerating((v) => 6 - 0.09 * v))!;
		expect(JSON.parse(JSON.stringify(model))).toEqual(model);
	});
});
