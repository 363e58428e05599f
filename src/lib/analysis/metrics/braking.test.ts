import fc from 'fast-check';
import { describe, expect, it, vi } from 'vitest';
import { brakeApplications } from './brakeApplications.ts';
import type { Signal } from './crossing.ts';
import { measureBraking } from './measureBraking.ts';
import { pedalNoise } from './noiseLevel.ts';
import { knotValue } from './testing/closedForm.ts';
import { seededNormal } from './testing/seededNormal.ts';

type Knots = [number, number][];

function sampled(knots: Knots, rateHz: number, phase: number, noise?: { sd: number; seed: number }): Signal {
	const normal = seededNormal(noise?.seed ?? 1);
	const count = Math.floor((knots[knots.length - 1][0] + 1) * rateHz);
	const timeS = Float64Array.from({ length: count }, (_, k) => (k + phase) / rateHz);
	const values = timeS.map((t) => Math.max(0, knotValue(knots, t) + (noise ? noise.sd * normal() : 0)));
	return { timeS, values, noise: noise ? pedalNoise(values) : 0 };
}

const slowing = (signal: Signal) => signal.timeS.map((t) => 200 - 20 * t);

function brakings(signal: Signal, rateHz: number, speedKmh = slowing(signal)) {
	return brakeApplications(signal, speedKmh, 0).map((application) => measureBraking(signal, application, 1 / rateHz));
}

/** a trapezoid: onset, rise to the peak, plateau, straight release, with an optional light hold of 8 % */
const trapezoids = fc.record({
	onsetS: fc.double({ min: 1, max: 2, noNaN: true }),
	peakPct: fc.double({ min: 30, max: 100, noNaN: true }),
	riseS: fc.double({ min: 0.08, max: 0.4, noNaN: true }),
	plateauS: fc.double({ min: 0.35, max: 2, noNaN: true }),
	releaseS: fc.double({ min: 0.3, max: 2.5, noNaN: true }),
	holdS: fc.constantFrom(0, 0.4, 0.6, 0.9),
	phase: fc.double({ min: 0, max: 1, noNaN: true })
});
type Trapezoid = typeof trapezoids extends fc.Arbitrary<infer T> ? T : never;

function knotsOf({ onsetS, peakPct, riseS, plateauS, releaseS: wantedS, holdS }: Trapezoid): Knots {
	// under 15 % per s a release in the band of light holds is one by definition
	const releaseS = Math.min(wantedS, (peakPct - (holdS > 0 ? 8 : 0)) / 18);
	const top = onsetS + riseS;
	const release = top + plateauS;
	if (holdS === 0)
		return [
			[0, 0],
			[onsetS, 0],
			[top, peakPct],
			[release, peakPct],
			[release + releaseS, 0]
		];
	const held = release + releaseS;
	return [
		[0, 0],
		[onsetS, 0],
		[top, peakPct],
		[release, peakPct],
		[held, 8],
		[held + holdS, 8],
		[held + holdS + 0.1, 0]
	];
}

/** when the falling side of the last ramp is at a level */
function lastAt(knots: Knots, level: number): number {
	const [[ta, ya], [tb, yb]] = knots.slice(-2);
	return ta + ((ya - level) / (ya - yb)) * (tb - ta);
}

// hundreds of runs a property; a busy machine needs more than the usual five seconds
vi.setConfig({ testTimeout: 60_000 });

describe('measureBraking', () => {
	it('finds onset, peak, rise, release and off of a trapezoid wherever the samples fall', () => {
		fc.assert(
			fc.property(trapezoids, fc.constantFrom(50, 60, 100), (shape, rateHz) => {
				const knots = knotsOf(shape);
				const found = brakings(sampled(knots, rateHz, shape.phase), rateHz);
				expect(found).toHaveLength(1);
				const [braking] = found;
				expect(
					Math.abs((braking.onset?.timeS ?? NaN) - (shape.onsetS + (5 / shape.peakPct) * shape.riseS))
				).toBeLessThan(0.003);
				expect(Math.abs(braking.peakPct - shape.peakPct)).toBeLessThan(0.02 * shape.peakPct);
				expect(Math.abs((braking.riseS ?? NaN) - (0.9 - 5 / shape.peakPct) * shape.riseS)).toBeLessThan(0.006);
				expect(Math.abs(braking.releaseStartS - (shape.onsetS + shape.riseS + shape.plateauS))).toBeLessThan(0.03);
				expect(Math.abs((braking.off?.timeS ?? NaN) - lastAt(knots, 2))).toBeLessThan(0.004);
				expect(braking.dabs).toBe(0);
				const heldS = braking.lightHolds.reduce((sum, hold) => sum + hold.endS - hold.startS, 0);
				expect(Math.abs(heldS - shape.holdS)).toBeLessThan(shape.holdS === 0 ? 1e-9 : 0.04);
			}),
			{ numRuns: 300, seed: 11 }
		);
	});

	it('does not depend on when the clock starts', () => {
		fc.assert(
			fc.property(trapezoids, fc.double({ min: -1e4, max: 1e4, noNaN: true }), (shape, shiftS) => {
				const plain = sampled(knotsOf(shape), 60, shape.phase);
				const moved = { ...plain, timeS: plain.timeS.map((t) => t + shiftS) };
				const [a] = brakings(plain, 60);
				const [b] = brakings(moved, 60, slowing(plain));
				expect((b.onset?.timeS ?? NaN) - shiftS).toBeCloseTo(a.onset?.timeS ?? NaN, 6);
				expect((b.off?.timeS ?? NaN) - shiftS).toBeCloseTo(a.off?.timeS ?? NaN, 6);
				expect(b.peakPct).toBe(a.peakPct);
			}),
			{ numRuns: 50, seed: 12 }
		);
	});

	it('scales its peak and shares with the pressure, as long as the 5 % is the same share', () => {
		fc.assert(
			fc.property(trapezoids, fc.double({ min: 0.5, max: 1, noNaN: true }), (shape, factor) => {
				const plain = sampled(knotsOf({ ...shape, holdS: 0 }), 100, shape.phase);
				const [a] = brakings(plain, 100);
				const [b] = brakings({ ...plain, values: plain.values.map((value) => factor * value) }, 100);
				expect(b.peakPct).toBeCloseTo(factor * a.peakPct, 3);
				expect(b.releaseStartS).toBeCloseTo(a.releaseStartS, 6);
			}),
			{ numRuns: 50, seed: 13 }
		);
	});

	it('keeps its bars under noise of 0.5 % and sees no hold in a straight release of 20 % per s and more', () => {
		const errors = { onset: [] as number[], off: [] as number[], peak: [] as number[], hold: [] as number[] };
		let ghosts = 0;
		fc.assert(
			fc.property(trapezoids, fc.integer({ min: 1, max: 1e6 }), (shape, seed) => {
				const steep = { ...shape, releaseS: Math.min(shape.releaseS, shape.peakPct / 20) };
				const knots = knotsOf(steep);
				const signal = sampled(knots, 60, shape.phase, { sd: 0.5, seed });
				const [braking] = brakings(signal, 60);
				errors.onset.push(Math.abs((braking.onset?.timeS ?? NaN) - (shape.onsetS + (5 / shape.peakPct) * shape.riseS)));
				errors.off.push(Math.abs((braking.off?.timeS ?? NaN) - lastAt(knots, 2)));
				errors.peak.push(Math.abs(braking.peakPct - shape.peakPct));
				const heldS = braking.lightHolds.reduce((sum, hold) => sum + hold.endS - hold.startS, 0);
				if (shape.holdS === 0 && heldS > 0) ghosts++;
				if (shape.holdS > 0) errors.hold.push(Math.abs(heldS - shape.holdS));
			}),
			{ numRuns: 300, seed: 14 }
		);
		const p95 = (values: number[]) => Float64Array.from(values).sort()[Math.floor(0.95 * values.length)];
		console.log(
			'noise 0.5 %, p95:',
			Object.entries(errors).map(([name, list]) => `${name} ${p95(list).toFixed(4)}`),
			ghosts
		);
		expect(p95(errors.onset)).toBeLessThan(0.01);
		expect(p95(errors.off)).toBeLessThan(0.06);
		expect(p95(errors.peak)).toBeLessThan(3);
		expect(p95(errors.hold)).toBeLessThan(0.15);
		expect(ghosts).toBe(0);
	});

	it('places the onset of a stroke that begins softly within the bar of its rate', () => {
		// a smooth step (3u² − 2u³) of 0.15 s to 90 % at 50 m/s; bars 0.3 m, 1.4 m, 3.8 m
		const crossesAtS = 1 + 0.15 * 0.1407;
		for (const [rateHz, barM] of [
			[60, 0.3],
			[20, 1.4],
			[10, 3.8]
		]) {
			const errors = Array.from({ length: 40 }, (_, k) => {
				const timeS = Float64Array.from({ length: 4 * rateHz }, (_, i) => (i + k / 40) / rateHz);
				const values = timeS.map((t) => {
					const u = Math.min(Math.max((t - 1) / 0.15, 0), 1) - Math.min(Math.max((t - 2) / 0.8, 0), 1);
					return u <= 0 ? 0 : 90 * u * u * (3 - 2 * u);
				});
				const [braking] = brakings({ timeS, values, noise: 0 }, rateHz);
				return Math.abs((braking.onset?.timeS ?? NaN) - crossesAtS) * 50;
			});
			expect(errors.sort((a, b) => a - b)[37]).toBeLessThan(barM);
		}
	});

	it('takes the level held for 0.05 s, and names the spike beside it', () => {
		const knots: Knots = [
			[0, 0],
			[1, 0],
			[1.1, 70],
			[1.49, 70],
			[1.5, 95],
			[1.51, 70],
			[2, 70],
			[2.5, 0]
		];
		const [braking] = brakings(sampled(knots, 500, 0), 500);
		expect(braking.peakPct).toBeGreaterThan(69.9);
		expect(braking.peakPct).toBeLessThan(73);
		expect(braking.peakRawPct).toBeCloseTo(95, 3);
	});

	it('starts the release at the end of the last level, however high the peak before it was', () => {
		// common practice: hold, then bleed off; the last level of 0.3 s above half of the peak ends at 2.6 s
		const knots: Knots = [
			[0, 0],
			[1, 0],
			[1.1, 90],
			[1.6, 90],
			[1.8, 60],
			[2.6, 60],
			[3.6, 0]
		];
		const [braking] = brakings(sampled(knots, 100, 0.3), 100);
		expect(braking.releaseStartS).toBeCloseTo(2.6, 2);
	});

	it('starts the release of a stroke without a level at the last 90 % of its peak', () => {
		const knots: Knots = [
			[0, 0],
			[1, 0],
			[1.2, 80],
			[2.2, 0]
		];
		const [braking] = brakings(sampled(knots, 100, 0), 100);
		// a tip between slopes of 400 and 80 % per s: the level held for 0.04–0.05 s is 77.3–76.7 %, and 90 % of it passes at 1.33 s
		expect(braking.releaseStartS).toBeGreaterThan(1.325);
		expect(braking.releaseStartS).toBeLessThan(1.34);
	});

	it.each<{ name: string; knots: Knots; progressive: boolean }>([
		{
			name: 'a straight release',
			knots: [
				[0, 0],
				[1, 0],
				[1.1, 80],
				[1.6, 80],
				[2.6, 0]
			],
			progressive: true
		},
		{
			name: '20 → 15 → 10 → 5 % ever more gently (common practice, no source)',
			knots: [
				[0, 0],
				[1, 0],
				[1.1, 40],
				[1.6, 40],
				[1.8, 20],
				[2, 15],
				[2.4, 10],
				[3, 5],
				[3.8, 0]
			],
			progressive: true
		},
		{
			name: 'a release that is dropped',
			knots: [
				[0, 0],
				[1, 0],
				[1.1, 80],
				[1.6, 80],
				[2.4, 60],
				[2.5, 0]
			],
			progressive: false
		},
		{
			name: 'a release with a second squeeze',
			knots: [
				[0, 0],
				[1, 0],
				[1.1, 80],
				[1.6, 80],
				[2, 30],
				[2.3, 50],
				[3, 0]
			],
			progressive: false
		}
	])('judges $name', ({ knots, progressive }) => {
		const [braking] = brakings(sampled(knots, 100, 0.4), 100);
		expect(braking.releaseProgressive).toBe(progressive);
	});
});

describe('brakeApplications', () => {
	it('makes one application of a brake that is pulsed at the sampling rate', () => {
		const timeS = Float64Array.from({ length: 400 }, (_, i) => i / 50);
		const values = timeS.map((t, i) => (t < 1 || t > 3 ? 0 : i % 4 < 2 ? 60 : 0));
		const found = brakings({ timeS, values, noise: pedalNoise(values) }, 50);
		expect(found).toHaveLength(1);
		expect(found[0].dabs).toBeGreaterThan(15);
		expect(found[0].peakPct).toBeCloseTo(60, 6);
	});

	it('merges a second dab while the car only slows, and not once it has accelerated', () => {
		const knots: Knots = [
			[0, 0],
			[1, 0],
			[1.1, 80],
			[1.6, 80],
			[1.7, 0],
			[2.05, 0],
			[2.1, 50],
			[2.5, 50],
			[2.6, 0]
		];
		const signal = sampled(knots, 100, 0);
		const slows = brakings(signal, 100);
		expect(slows).toHaveLength(1);
		expect(slows[0].dabs).toBe(1);
		const accelerates = signal.timeS.map((t) => (t < 1.7 ? 200 - 30 * t : 149 + 10 * (t - 1.7)));
		expect(brakings(signal, 100, accelerates)).toHaveLength(2);
	});

	it('keeps brakings apart that lie over half a second from each other', () => {
		const knots: Knots = [
			[0, 0],
			[1, 0],
			[1.1, 80],
			[1.6, 80],
			[1.7, 0],
			[2.4, 0],
			[2.5, 50],
			[2.8, 0]
		];
		expect(brakings(sampled(knots, 100, 0), 100)).toHaveLength(2);
	});

	it('finds none in the noise of a foot that rests beside the pedal', () => {
		fc.assert(
			fc.property(fc.integer({ min: 1, max: 1e6 }), fc.constantFrom(0.3, 0.5, 1), (seed, sd) => {
				expect(
					brakings(
						sampled(
							[
								[0, 0],
								[60, 0]
							],
							60,
							0,
							{ sd, seed }
						),
						60
					)
				).toEqual([]);
			}),
			{ numRuns: 30, seed: 15 }
		);
	});

	it('says that a braking is cut where the recording begins, ends or has a hole under it', () => {
		const signal = sampled(
			[
				[0, 80],
				[3, 80]
			],
			50,
			0
		);
		const [whole] = brakings(signal, 50);
		expect(whole.onset).toBeNull();
		expect(whole.off).toBeNull();
		const holed = { ...signal, values: signal.values.map((value, i) => (i > 60 && i < 90 ? NaN : value)) };
		expect(brakings(holed, 50).map((one) => one.off)).toEqual([null, null]);
	});
});

describe('pedalNoise', () => {
	it.each([0.2, 0.5, 0.9])('measures %f %% through strokes and through a reading cut off at 0', (sd) => {
		const knots: Knots = Array.from({ length: 12 }, (_, k): Knots => [
			[5 * k, 0],
			[5 * k + 1, 0],
			[5 * k + 1.1, 80],
			[5 * k + 2, 70],
			[5 * k + 3.5, 0]
		]).flat();
		expect(sampled(knots, 60, 0, { sd, seed: 5 }).noise / sd).toBeGreaterThan(0.8);
		expect(sampled(knots, 60, 0, { sd, seed: 5 }).noise / sd).toBeLessThan(1.25);
	});

	it('is 0 for a clean pedal at any rate, and for a pulsed one', () => {
		const knots: Knots = Array.from({ length: 12 }, (_, k): Knots => [
			[5 * k, 0],
			[5 * k + 1, 0],
			[5 * k + 1.15, 80],
			[5 * k + 2, 80],
			[5 * k + 3.5, 0]
		]).flat();
		for (const rateHz of [10, 20, 60, 100]) expect(pedalNoise(sampled(knots, rateHz, 0.3).values)).toBe(0);
		const pulsed = Float64Array.from({ length: 5000 }, (_, i) => (i % 250 < 50 && i % 3 > 0 ? 60 : 0));
		expect(pedalNoise(pulsed)).toBe(0);
	});
});
