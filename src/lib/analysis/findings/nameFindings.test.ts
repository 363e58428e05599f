import { describe, expect, it } from 'vitest';
import { pointMassLap, TWO_CORNERS, type Stretch } from '../../../../tests/helpers/pointMassLap.ts';
import type { Comparison, CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { FullThrottleModel } from '../car/fullThrottle.ts';
import { compareLaps, type CompareSide } from '../compare/compareLaps.ts';
import { countsOnce } from './countsOnce.ts';
import { differenceOf, evidenceOf } from './difference.ts';

/** a car with a constant 4 m/s² at full throttle */
const STEADY: FullThrottleModel = {
	coefficients: [4, 0, 0],
	fromKmh: 40,
	toKmh: 250,
	residualMps2: 0.1,
	samples: 300,
	from: 'throttle'
};

function compare(driver: CompareSide, reference: CompareSide, fullThrottle: FullThrottleModel | null = STEADY) {
	return compareLaps({
		driver,
		reference,
		corners: TWO_CORNERS,
		run: { metrics: driver.metrics, cleanLaps: [], fullThrottle }
	});
}

const said = ({ findings }: Comparison) =>
	findings.filter(countsOnce).map(({ corner, code, costS }) => ({ corner, code, costS: Number(costS?.toFixed(3)) }));

/** brakes at 300 m from 55.3 m/s, rolls through at 20 m/s, picks up at 430 m; flat through corner 2 */
const REFERENCE: Stretch[] = [
	{ toM: 300, mps2: 1 },
	{ toM: 400, mps2: -10, brakePct: 80 },
	{ toM: 430, mps2: 0, throttlePct: 0 },
	{ toM: 450, mps2: 2, throttlePct: 50 },
	{ toM: 1000, mps2: 2 }
];
const START_MPS = 42.43; // √1800: 300 m at 1 m/s² lead to √2400, 100 m at −10 m/s² to √400
const reference = () => pointMassLap(1, START_MPS, REFERENCE);

/** the same lap with some stretches replaced */
function driven(stretches: Stretch[], startMps = START_MPS): CompareSide {
	return pointMassLap(2, startMps, stretches);
}

describe('nameFindings', () => {
	it('charges a slow opening of the throttle to hesitation where the pick-up is not late', () => {
		const lap = driven([...REFERENCE.slice(0, 3), { toM: 480, mps2: 1, throttlePct: 30 }, { toM: 1000, mps2: 2 }]);
		const comparison = compare(lap, reference());
		expect(said(comparison)[0]).toEqual({
			corner: 1,
			code: 'pick_up_hesitant',
			costS: expect.closeTo(comparison.deltaS, 2)
		});
	});

	it('charges closing the throttle again to the second lift, not to the exit', () => {
		const stretches: Stretch[] = [
			...REFERENCE.slice(0, 4),
			{ toM: 500, mps2: 2 },
			{ toM: 540, mps2: -1, throttlePct: 20 },
			{ toM: 1000, mps2: 2 }
		];
		const lap = pointMassLap(2, START_MPS, stretches, { 1: { secondLiftS: 1.2 } });
		const whole = pointMassLap(1, START_MPS, REFERENCE, { 1: { secondLiftS: 0 } });
		const comparison = compare(lap, whole);
		expect(said(comparison)[0]).toEqual({
			corner: 1,
			code: 'second_lift',
			costS: expect.closeTo(comparison.deltaS, 2)
		});
	});

	it('makes one finding of an entry that was too fast: what it gained, less what the wait for the throttle cost', () => {
		const lap = driven([
			{ toM: 308, mps2: 1 },
			{ toM: 408, mps2: -10.16, brakePct: 80 },
			{ toM: 444, mps2: 0, throttlePct: 0 },
			{ toM: 464, mps2: 2, throttlePct: 50 },
			{ toM: 1000, mps2: 2 }
		]);
		const comparison = compare(lap, reference());
		expect(comparison.deltaS).toBeGreaterThan(0.05);
		expect(said(comparison)).toEqual([{ corner: 1, code: 'brake_late', costS: expect.closeTo(comparison.deltaS, 2) }]);
	});

	it('counts braking later as time found where nothing follows from it', () => {
		const lap = driven([{ toM: 308, mps2: 1 }, { toM: 400, mps2: -10.9565, brakePct: 80 }, ...REFERENCE.slice(2)]);
		const comparison = compare(lap, reference());
		expect(comparison.deltaS).toBeLessThan(-0.02);
		expect(said(comparison)).toEqual([{ corner: 1, code: 'brake_late', costS: expect.closeTo(comparison.deltaS, 2) }]);
	});

	it('splits an earlier onset between a weaker braking and the rest', () => {
		// −8 m/s² needs 120 m for what −10 m/s² does in under 100 m; the driver brakes 40 m early and then rolls
		const lap = pointMassLap(
			2,
			START_MPS,
			[{ toM: 260, mps2: 1 }, { toM: 380, mps2: -8, brakePct: 64 }, ...REFERENCE.slice(2)],
			{ 1: { peakPct: 64 } }
		);
		const whole = pointMassLap(1, START_MPS, REFERENCE, { 1: { peakPct: 80 } });
		const [first, second] = said(compare(lap, whole));
		expect([first.code, second.code].sort()).toEqual(['brake_early', 'peak_under']);
		expect(first.costS + second.costS).toBeCloseTo(compare(lap, whole).deltaS, 2);
		expect(second.costS).toBeGreaterThan(0.2 * first.costS);
	});

	it('splits an early braking to a low minimum speed where the lowest speed is reached', () => {
		// the same deceleration, 12 m early and 15 m longer: 17.3 m/s instead of 20
		const lap = driven([{ toM: 288, mps2: 1 }, { toM: 392, mps2: -9.9, brakePct: 80 }, ...REFERENCE.slice(2)]);
		const comparison = compare(lap, reference());
		const found = said(comparison);
		expect(found.map(({ code }) => code).sort()).toEqual(['brake_early', 'min_speed_low']);
		expect(found[0].costS + found[1].costS).toBeCloseTo(comparison.deltaS, 2);
		// the ledger's entry is what the early braking costs, the rest is carried from the low minimum on
		const early = found.find(({ code }) => code === 'brake_early')?.costS ?? NaN;
		expect(early).toBeGreaterThan(0.5 * comparison.ledger[1].entryS);
	});

	it('calls what a straight costs beyond arrival speed and full throttle the car, a tow or the wind', () => {
		const lap = driven([...REFERENCE.slice(0, 4), { toM: 1000, mps2: 1.6 }]);
		const comparison = compare(lap, reference());
		const found = said(comparison);
		expect(found.map(({ corner, code }) => `${corner} ${code}`)).toEqual(['1 car_or_wind', '2 car_or_wind']);
		expect(found[0].costS + found[1].costS).toBeCloseTo(comparison.deltaS, 1);
	});

	it('leaves a gap that shrinks by the car’s own acceleration with its cause', () => {
		// drag: the slower car accelerates harder, so the gap halves on the straight
		const drag = (speedMps: number) => 5 - 0.0016 * speedMps * speedMps;
		const car: FullThrottleModel = { ...STEADY, coefficients: [5, 0, -0.0016] };
		const on = (pickUpM: number): Stretch[] => [
			...REFERENCE.slice(0, 2),
			{ toM: pickUpM, mps2: 0, throttlePct: 0 },
			{ toM: 1000, mps2: drag }
		];
		const comparison = compare(driven(on(442)), pointMassLap(1, START_MPS, on(430)), car);
		expect(said(comparison)).toEqual([
			{ corner: 1, code: 'pick_up_late', costS: expect.closeTo(comparison.deltaS, 2) }
		]);
	});

	it('says what the lap before left, and charges no corner with it', () => {
		const slower: Stretch[] = [{ toM: 300, mps2: 1 }, { toM: 400, mps2: -9.5, brakePct: 80 }, ...REFERENCE.slice(2)];
		const comparison = compare(driven(slower, Math.sqrt(START_MPS ** 2 - 100)), reference());
		const [first, ...rest] = said(comparison);
		expect(first).toEqual({ corner: 0, code: 'carried_in', costS: expect.closeTo(comparison.deltaS, 2) });
		expect(rest.filter(({ costS }) => costS > 0.005)).toEqual([]);
	});

	it('tells a lift where the reference stays flat', () => {
		const lifting: Stretch[] = [
			...REFERENCE.slice(0, 4),
			{ toM: 760, mps2: 2 },
			{ toM: 800, mps2: -1.5, throttlePct: 40 },
			{ toM: 1000, mps2: 2 }
		];
		const comparison = compare(driven(lifting), reference());
		expect(said(comparison)).toEqual([{ corner: 2, code: 'lift_extra', costS: expect.closeTo(comparison.deltaS, 2) }]);
		expect(comparison.findings[0].text).toMatch(/^Lifts at 760.m, where the reference does not lift\.$/);
	});

	it('subtracts places on either side of the line the short way', () => {
		const onset = (onsetM: number) => ({ onsetM, plusMinus: {} }) as CornerMetrics;
		const pair = { driver: onset(990), reference: onset(2), apexM: 40, lengthM: 1000 };
		expect(differenceOf(pair, 'onsetM')?.by).toBe(-12);
		expect(evidenceOf(pair, 'onsetM', null)).toMatchObject({ driver: -10, reference: 2, atM: -10 });
	});
});
