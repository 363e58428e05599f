import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { channelsOf } from '../metrics/testing/channelsOf.ts';
import type { PlacedRun } from '../model.ts';
import { placeAtTime, timeAtPlace, timeShare, wayShare } from './placeTime.ts';

/** A run with constant acceleration, sampled at a rate. */
function accelerating(v0: number, acceleration: number, rateHz: number, lengthS: number): PlacedRun {
	const timeS = Float64Array.from({ length: Math.floor(lengthS * rateHz) + 1 }, (_, i) => i / rateHz);
	const placeM = timeS.map((t) => v0 * t + (acceleration * t * t) / 2);
	const speedKmh = timeS.map((t) => (v0 + acceleration * t) * 3.6);
	return placed(timeS, placeM, speedKmh);
}

function placed(timeS: Float64Array, placeM: Float64Array, speedKmh: Float64Array): PlacedRun {
	return {
		channels: channelsOf({ timeS, speedKmh }),
		placeM,
		offsetM: null,
		curvaturePerM: null,
		laps: [],
		path: {
			lengthM: 1000,
			closed: true,
			xM: new Float64Array(0),
			yM: new Float64Array(0),
			curvaturePerM: new Float64Array(0),
			origin: 'speedOnly',
			line: 'mark',
			speedKmh: new Float64Array(0),
			frame: null
		}
	};
}

describe('timeAtPlace', () => {
	it('is exact for constant acceleration at any rate, where straight lines would be milliseconds off', () => {
		const motion = fc.record({
			v0: fc.double({ min: 20, max: 80, noNaN: true }),
			acceleration: fc.double({ min: -9, max: 5, noNaN: true }),
			rateHz: fc.constantFrom(10, 20, 60),
			at: fc.double({ min: 0.05, max: 1.9, noNaN: true })
		});
		fc.assert(
			fc.property(motion, ({ v0, acceleration, rateHz, at }) => {
				const run = accelerating(v0, acceleration, rateHz, 2);
				const place = v0 * at + (acceleration * at * at) / 2;
				expect(timeAtPlace(run, place)).toBeCloseTo(at, 9);
				expect(placeAtTime(run, at)).toBeCloseTo(place, 7);
			}),
			{ seed: 7, numRuns: 300 }
		);
	});

	it('is the first time at a place where the car stands', () => {
		const run = placed(
			Float64Array.of(0, 1, 2, 3, 4),
			Float64Array.of(0, 10, 10, 10, 20),
			Float64Array.of(36, 36, 0, 0, 36)
		);
		expect(timeAtPlace(run, 10)).toBe(1);
	});

	it('carries the last speed on for a sample step beyond the ends, and no further', () => {
		const run = accelerating(30, 0, 10, 1);
		expect(timeAtPlace(run, -3)).toBeCloseTo(-0.1, 9);
		expect(timeAtPlace(run, 33)).toBeCloseTo(1.1, 9);
		expect(timeAtPlace(run, 36)).toBeNaN();
		expect(placeAtTime(run, 1.1)).toBeCloseTo(33, 9);
		expect(placeAtTime(run, 1.3)).toBeNaN();
	});

	it('leaves out samples without a place at both ends', () => {
		const run = placed(Float64Array.of(0, 1, 2, 3), Float64Array.of(NaN, 10, 20, NaN), Float64Array.of(36, 36, 36, 36));
		expect(timeAtPlace(run, 15)).toBeCloseTo(1.5, 9);
		expect(timeAtPlace(run, 40)).toBeNaN();
	});
});

describe('timeShare', () => {
	it('is undone by wayShare', () => {
		const speed = fc.double({ min: 0, max: 100, noNaN: true });
		fc.assert(
			fc.property(fc.double({ min: 0, max: 1, noNaN: true }), speed, speed, (share, v0, v1) => {
				fc.pre(v0 + v1 > 1);
				expect(timeShare(wayShare(share, v0, v1), v0, v1)).toBeCloseTo(share, 6);
			}),
			{ seed: 8, numRuns: 300 }
		);
	});

	it('is straight where speeds are missing', () => {
		expect(timeShare(0.3, NaN, 10)).toBe(0.3);
		expect(wayShare(0.3, 0, 0)).toBe(0.3);
	});
});
