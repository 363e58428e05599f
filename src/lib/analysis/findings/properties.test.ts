import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { pointMassLap, TWO_CORNERS, type Stretch } from '../../../../tests/helpers/pointMassLap.ts';
import { layCircuit, plannedLap, type Circuit, type CornerPlan } from '../../../../tests/helpers/plannedLap.ts';
import type { Comparison } from '../../schemas/analysisDocument.ts';
import { compareLaps, type CompareSide } from '../compare/compareLaps.ts';
import { isProgressive } from '../metrics/isProgressive.ts';
import { measureBraking } from '../metrics/measureBraking.ts';
import { brakeApplications } from '../metrics/brakeApplications.ts';
import { knotValue } from '../metrics/testing/closedForm.ts';
import { countsOnce } from './countsOnce.ts';

const CAR = {
	coefficients: [3.6, 0, 0] as [number, number, number],
	fromKmh: 40,
	toKmh: 220,
	residualMps2: 0.05,
	samples: 300,
	from: 'throttle' as const
};

const circuits = fc
	.array(
		fc.record({
			straightM: fc.integer({ min: 200, max: 500 }),
			minMps: fc.integer({ min: 12, max: 24 }),
			plateauM: fc.integer({ min: 20, max: 50 })
		}),
		{ minLength: 4, maxLength: 6 }
	)
	.map((sketches) => layCircuit(sketches));

type Mistake = (plan: CornerPlan) => Partial<CornerPlan>;
const EARLY: Mistake = ({ onsetM }) => ({ onsetM: onsetM - 12 });
const SLOW: Mistake = ({ minMps }) => ({ minMps: minMps - 4 / 3.6 });
const LATE: Mistake = ({ pickUpM }) => ({ pickUpM: pickUpM + 15 });

function drive(circuit: Circuit, lap: number, mistakes: Record<number, Mistake> = {}): CompareSide {
	const plans = circuit.plans.map((plan, k) => ({ ...plan, ...mistakes[k]?.(plan) }));
	return plannedLap({ ...circuit, plans }, lap);
}

const compare = (circuit: Circuit, driver: CompareSide, reference: CompareSide): Comparison =>
	compareLaps({
		driver,
		reference,
		corners: circuit.corners,
		run: { metrics: driver.metrics, cleanLaps: [], fullThrottle: CAR }
	});

const costAt = ({ findings }: Comparison, corner: number): number =>
	findings.filter((f) => f.corner === corner && countsOnce(f)).reduce((sum, { costS }) => sum + (costS ?? 0), 0);

describe('comparing two laps, on any circuit', () => {
	it('gives zero everywhere and no finding for a lap against itself', () => {
		fc.assert(
			fc.property(circuits, (circuit) => {
				const lap = drive(circuit, 1, { 1: EARLY });
				const { delta, ledger, findings, deltaS } = compare(circuit, lap, lap);
				expect(deltaS).toBe(0);
				expect(delta.every((s) => s === 0)).toBe(true);
				expect(ledger.every(({ totalS }) => totalS === 0)).toBe(true);
				expect(findings).toEqual([]);
			}),
			{ seed: 3, numRuns: 8 }
		);
	});

	it('flips the signs of Δ and ledger when the laps change places, and sums within a microsecond', () => {
		fc.assert(
			fc.property(circuits, (circuit) => {
				const [one, other] = [drive(circuit, 1, { 0: SLOW, 2: LATE }), drive(circuit, 2)];
				const there = compare(circuit, one, other);
				const back = compare(circuit, other, one);
				expect(back.deltaS).toBeCloseTo(-there.deltaS, 12);
				there.delta.forEach((s, i) => expect(Math.abs(s + back.delta[i])).toBeLessThan(1e-12));
				for (const { ledger, deltaS } of [there, back])
					expect(Math.abs(ledger.reduce((sum, { totalS }) => sum + totalS, 0) - deltaS)).toBeLessThan(1e-6);
			}),
			{ seed: 5, numRuns: 8 }
		);
	});

	it('lets a cost vanish with its cause, and leaves the other as it was', () => {
		fc.assert(
			fc.property(circuits, fc.constantFrom(EARLY, SLOW, LATE), (circuit, mistake) => {
				const reference = drive(circuit, 1);
				const both = compare(circuit, drive(circuit, 2, { 0: mistake, 2: LATE }), reference);
				const one = compare(circuit, drive(circuit, 2, { 2: LATE }), reference);
				fc.pre(costAt(both, 1) > 0.03);
				expect(Math.abs(costAt(one, 1))).toBeLessThan(0.005);
				expect(Math.abs(costAt(one, 3) - costAt(both, 3))).toBeLessThan(0.02);
				expect(one.findings.filter(({ corner }) => corner === 1)).toEqual([]);
			}),
			{ seed: 9, numRuns: 12 }
		);
	});

	it('says the same whichever hand the corners are', () => {
		fc.assert(
			fc.property(circuits, (circuit) => {
				const mirrored: Circuit = {
					...circuit,
					corners: circuit.corners.map((corner) => ({
						...corner,
						direction: corner.direction === 'left' ? 'right' : 'left'
					}))
				};
				const say = (on: Circuit) => compare(on, drive(on, 2, { 1: SLOW }), drive(on, 1)).findings;
				expect(say(mirrored)).toEqual(say(circuit));
			}),
			{ seed: 6, numRuns: 5 }
		);
	});
});

/** Rules of thumb as check values (common practice, no source). */
describe('rules of thumb', () => {
	it('a lock-up costs 0.2–0.3 s: 30 m of sliding with a third less grip, wide of the apex, and the throttle that much later', () => {
		// 42.43 → 49 m/s at 300 m; the reference slows with 10 m/s² to 20 m/s at 400 m and picks up at 430 m
		const reference: Stretch[] = [
			{ toM: 300, mps2: 1 },
			{ toM: 400, mps2: -10, brakePct: 80 },
			{ toM: 430, mps2: 0, throttlePct: 0 },
			{ toM: 450, mps2: 2, throttlePct: 50 },
			{ toM: 1000, mps2: 2 }
		];
		// locked from 340 to 370 m: 7 m/s² instead of 10, so that 20 m/s is reached at 409 m; from further out it takes 6 m more to come round to the throttle
		const locked: Stretch[] = [
			{ toM: 300, mps2: 1 },
			{ toM: 340, mps2: -10, brakePct: 80 },
			{ toM: 370, mps2: -7, brakePct: 80 },
			{ toM: 409, mps2: -10, brakePct: 80 },
			{ toM: 445, mps2: 0, throttlePct: 0 },
			{ toM: 465, mps2: 2, throttlePct: 50 },
			{ toM: 1000, mps2: 2 }
		];
		const driver = pointMassLap(2, 42.43, locked, { 1: { lockUps: 1, lockWheels: 'fl' } });
		const whole = pointMassLap(1, 42.43, reference, { 1: { lockUps: 0 } });
		const { findings, deltaS } = compareLaps({
			driver,
			reference: whole,
			corners: TWO_CORNERS,
			run: { metrics: driver.metrics, cleanLaps: [], fullThrottle: { ...CAR, coefficients: [2, 0, 0] } }
		});
		expect(findings[0]).toMatchObject({ corner: 1, code: 'lock_up' });
		expect(findings[0].text).toContain('Locks the front left.');
		expect(findings[0].costS).toBeGreaterThanOrEqual(0.2);
		expect(findings[0].costS).toBeLessThanOrEqual(0.3);
		expect(Math.abs((findings[0].costS ?? 0) - deltaS)).toBeLessThan(0.005);
	});

	const brakeOf = (knots: [number, number][], rateHz: number) => {
		const timeS = Float64Array.from({ length: Math.round(4 * rateHz) }, (_, i) => i / rateHz);
		return { timeS, values: timeS.map((t) => knotValue(knots, t)), noise: 0 };
	};

	it.each([20, 60, 100])('a light braking let go 20 → 15 → 10 → 5 % reads as progressive at %d Hz', (rateHz) => {
		const even: [number, number][] = [
			[0.5, 0],
			[0.6, 20],
			[1.2, 20],
			[1.5, 15],
			[1.8, 10],
			[2.1, 5],
			[2.4, 0]
		];
		expect(isProgressive(brakeOf(even, rateHz), 1.2, 2.4, 20)).toBe(true);
		const late: [number, number][] = [
			[0.5, 0],
			[0.6, 20],
			[1.2, 20],
			[2.1, 15],
			[2.4, 0]
		];
		expect(isProgressive(brakeOf(late, rateHz), 1.2, 2.4, 20)).toBe(false);
	});

	it.each([50, 100])('a light hold of 0.6 s is measured within the 0.5–0.7 s of the rule at %d Hz', (rateHz) => {
		const brake = brakeOf(
			[
				[0.5, 0],
				[0.6, 60],
				[1.2, 60],
				[1.6, 7],
				[2.2, 7],
				[2.3, 0]
			],
			rateHz
		);
		const speedKmh = brake.timeS.map((t) => 150 - 25 * t);
		const [application] = brakeApplications(brake, speedKmh, 0);
		const { lightHolds } = measureBraking(brake, application, 1 / rateHz);
		const longest = Math.max(...lightHolds.map(({ startS, endS }) => endS - startS));
		expect(longest).toBeGreaterThan(0.5);
		expect(longest).toBeLessThan(0.7);
	});
});
