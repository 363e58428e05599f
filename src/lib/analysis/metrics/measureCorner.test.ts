import fc from 'fast-check';
import { describe, expect, it, vi } from 'vitest';
import { metricsSchema, type Corner, type CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { PlacedRun } from '../model.ts';
import { measureRun } from './measureRun.ts';
import { cornerAt, placedOf, placeOnCourse, type MadeUpRun } from './testing/placedOf.ts';

type Knots = [number, number][];

/** 180 km/h, slowed to 80 from 2 s to 4.5 s, held to 6 s, up to 180 at 11 s */
const speedKmh: Knots = [
	[0, 180],
	[2, 180],
	[4.5, 80],
	[6, 80],
	[11, 180],
	[16, 180]
];
const brakePct: Knots = [
	[0, 0],
	[2, 0],
	[2.1, 80],
	[3.5, 80],
	[4.7, 0]
];
const throttlePct: Knots = [
	[0, 100],
	[1.9, 100],
	[2, 0],
	[5, 0],
	[5.5, 100]
];
const curvaturePerM: Knots = [
	[0, 0],
	[4, 0],
	[4.5, 0.02],
	[6, 0.02],
	[7, 0]
];
const base: MadeUpRun = { lengthS: 16, rateHz: 50, phase: 0.3, speedKmh, brakePct, throttlePct, curvaturePerM };
const at = (timeS: number) => placeOnCourse(speedKmh, timeS);
const corner = cornerAt(at(4), at(5.25), at(7));

function measure(run: Partial<MadeUpRun> = {}, corners: Corner[] = [corner]): CornerMetrics[] {
	return measureRun(placedOf({ ...base, ...run }), corners).metrics;
}

function expectPlace(value: number | null, timeS: number, withinM = 0.15): void {
	expect(value).not.toBeNull();
	expect(Math.abs((value ?? NaN) - at(timeS))).toBeLessThan(withinM);
}

// hundreds of runs a property; a busy machine needs more than the usual five seconds
vi.setConfig({ testTimeout: 60_000 });

describe('measureCorner', () => {
	it('measures a braked corner by the definitions', () => {
		const [m] = measure();
		expectPlace(m.onsetM, 2 + 0.1 * (5 / 80));
		expect(m.onsetS).toBeCloseTo(2 + 0.1 * (5 / 80) - 0.3 / 50 + 0.3 / 50, 3);
		expect(m.peakPct).toBeCloseTo(80, 6);
		expectPlace(m.releaseStartM, 3.5);
		expectPlace(m.releaseEndM, 4.7 - 1.2 * (2 / 80));
		expect(m.releaseS).toBeCloseTo(1.2 - 1.2 * (2 / 80), 2);
		expect(m.releaseProgressive).toBe(true);
		expect(m.dabs).toBe(0);
		expect(m.lightHoldS).toBe(0);
		expectPlace(m.turnInM, 4, 0.5);
		expect(m.trailS).toBeCloseTo(0.67, 1);
		expect(m.trailM).toBeCloseTo(at(4.67) - at(4), 0);
		expect(m.entryKmh).toBeCloseTo(100, 6);
		expect(m.minKmh).toBeCloseTo(80, 6);
		expect(m.minSpeedM).toBeGreaterThan(at(4.5));
		expect(m.minSpeedM).toBeLessThan(at(6));
		expect(m.exitKmh).toBeCloseTo(100, 6);
		expectPlace(m.liftM, 1.905);
		expect(m.smallestOpeningPct).toBe(0);
		expectPlace(m.pickUpM, 5.025);
		expectPlace(m.fullThrottleM, 5.475);
		expect(m.coastingS).toBeCloseTo(0.005 + 0.0025 + (5.025 - 4.67), 3);
		expect(m.overlapS).toBe(0);
		expect(m.secondLiftS).toBe(0);
		expect(m.timeS).toBeCloseTo(3, 6);
		const { idleGapS, holdPct, ...others } = m.reasons;
		expect([idleGapS, holdPct]).toEqual(['not_linked', 'no_hold']);
		expect(new Set(Object.values(others))).toEqual(new Set(['no_channel']));
	});

	it('gives what the schema asks for, and never a number that is none', () => {
		for (const run of [
			{},
			{ brakePct: null },
			{ throttlePct: null },
			{ brakePct: null, throttlePct: null },
			{ curvaturePerM: undefined }
		]) {
			for (const m of measure(run)) {
				expect(metricsSchema.parse(m)).toEqual(m);
				for (const [field, value] of Object.entries(m)) {
					if (value === null) expect(m.reasons, `${field} of ${JSON.stringify(run)}`).toHaveProperty(field);
				}
			}
		}
	});

	it('changes no input', () => {
		const placed = placedOf(base);
		const before = structuredClone(placed);
		measureRun(placed, [corner]);
		expect(placed).toEqual(before);
	});

	it('is the same wherever sampling begins, at 50 Hz and more', () => {
		const fields = [
			'onsetM',
			'releaseEndM',
			'pickUpM',
			'fullThrottleM',
			'liftM',
			'entryKmh',
			'minKmh',
			'coastingS',
			'timeS'
		] as const;
		const [plain] = measure();
		fc.assert(
			fc.property(fc.double({ min: 0, max: 1, noNaN: true }), fc.constantFrom(50, 60, 100, 200), (phase, rateHz) => {
				const [m] = measure({ phase, rateHz });
				for (const field of fields) expect(Math.abs((m[field] ?? NaN) - (plain[field] ?? NaN))).toBeLessThan(0.12);
			}),
			{ numRuns: 100, seed: 21 }
		);
	});

	it('holds its own ±: the onset lies within it at every rate', () => {
		const trueM = at(2 + 0.1 * (5 / 80));
		let outside = 0;
		for (const rateHz of [5, 10, 20, 50]) {
			for (let k = 0; k < 20; k++) {
				const [m] = measure({ rateHz, phase: k / 20 });
				if (Math.abs((m.onsetM ?? NaN) - trueM) > (m.plusMinus.onsetM ?? 0) + 0.05) outside++;
			}
		}
		expect(outside).toBeLessThanOrEqual(2);
	});

	it('says why a corner taken flat has no lift, brake or pick-up', () => {
		const [m] = measure({ brakePct: [[0, 0]], throttlePct: [[0, 100]] });
		expect(m.pickUpM).toBeNull();
		expect(m.reasons).toMatchObject({ pickUpM: 'flat', liftM: 'flat', coastingS: 'flat', onsetM: 'no_brake_here' });
		expect(m.minKmh).toBeCloseTo(80, 6);
	});

	it('gives the smallest opening of a corner that is lifted for, and where', () => {
		const [m] = measure({
			brakePct: [[0, 0]],
			throttlePct: [
				[0, 100],
				[4, 100],
				[4.2, 40],
				[5, 30],
				[5.6, 100]
			]
		});
		expect(m.smallestOpeningPct).toBeCloseTo(30, 0);
		expectPlace(m.smallestOpeningM, 5, 0.6);
		expectPlace(m.liftM, 4 + 0.2 * (5 / 60), 0.5);
		expect(m.pickUpM).toBeNull();
		expect(m.reasons.pickUpM).toBe('partly_lifted');
		expectPlace(m.fullThrottleM, 5.6 - 0.6 * (5 / 70), 0.3);
		expect(m.coastingS).toBe(0);
	});

	it('takes a throttle that the car cuts for one sample for no lift', () => {
		const cut: Knots = [
			[0, 100],
			[4.8, 100],
			[4.81, 10],
			[4.82, 10],
			[4.83, 100]
		];
		const [m] = measure({ brakePct: [[0, 0]], throttlePct: cut });
		expect(m.reasons.pickUpM).toBe('flat');
	});

	it('counts coasting before the brake and behind it', () => {
		const [m] = measure({
			throttlePct: [
				[0, 100],
				[1.2, 100],
				[1.3, 0],
				[5, 0],
				[5.5, 100]
			]
		});
		expect(m.coastingS).toBeCloseTo(2.0025 - 1.295 + (5.025 - 4.67), 2);
	});

	it('takes throttle that overlaps the brake from where it rose, and measures the overlap', () => {
		const [m] = measure({
			throttlePct: [
				[0, 100],
				[1.9, 100],
				[2, 0],
				[4, 0],
				[4.1, 20],
				[5, 20],
				[5.5, 100]
			]
		});
		expectPlace(m.pickUpM, 4.025);
		expect(m.overlapS).toBeCloseTo(4.625 - 4.025, 2);
		expect(m.coastingS).toBeLessThan(0.02);
	});

	it('takes a blip for a downshift for no pick-up', () => {
		const blip: Knots = [
			[0, 100],
			[1.9, 100],
			[2, 0],
			[4.6, 0],
			[4.65, 60],
			[4.75, 0],
			[5.3, 0],
			[5.8, 100]
		];
		const [m] = measure({ throttlePct: blip });
		expectPlace(m.pickUpM, 5.325, 0.3);
	});

	it('calls a long dip behind the pick-up a second lift, and a short one nothing', () => {
		const dip = (lengthS: number): Knots => [
			[0, 100],
			[1.9, 100],
			[2, 0],
			[5, 0],
			[5.5, 100],
			[6.5, 100],
			[6.6, 40],
			[6.6 + lengthS, 40],
			[6.7 + lengthS, 100]
		];
		const [long] = measure({ throttlePct: dip(0.8) });
		expect(long.secondLiftS).toBeCloseTo(0.8 + 2 * 0.1 * (40 / 60), 2);
		const [short] = measure({ throttlePct: dip(0.3) });
		expect(short.secondLiftS).toBe(0);
	});

	it('lets the slowing stand in for a missing brake channel, and says so', () => {
		const [m] = measure({ brakePct: null });
		expectPlace(m.onsetM, 2, 8);
		expect(m.reasons).toMatchObject({ onsetM: 'from_deceleration', peakPct: 'no_channel', coastingS: 'no_channel' });
		expect(m.peakPct).toBeNull();
	});

	it('knows only onset and end of an on/off brake', () => {
		const placed = placedOf({
			...base,
			brakePct: [
				[0, 0],
				[2, 0],
				[2.001, 100],
				[4.6, 100],
				[4.601, 0]
			]
		});
		const switched: PlacedRun = { ...placed, channels: { ...placed.channels, brakeUnit: 'switch' } };
		const [m] = measureRun(switched, [corner]).metrics;
		expectPlace(m.onsetM, 2, 0.6);
		expectPlace(m.releaseEndM, 4.6, 0.6);
		expect(m.peakPct).toBeNull();
		expect(m.reasons).toMatchObject({ peakPct: 'brake_switch', lightHoldS: 'brake_switch' });
	});

	it('has no numbers for a corner that the recording does not reach', () => {
		const metrics = measure({}, [corner, cornerAt(at(14), at(15.9), at(16) + 200, { number: 2 })]);
		const second = metrics.find((m) => m.corner === 2);
		expect(second?.timeS).toBeNull();
		expect(second?.reasons).toMatchObject({ timeS: 'not_reached', exitKmh: 'not_reached' });
	});

	it('says that what a hole in the recording swallowed is not known', () => {
		const placed = placedOf(base);
		const without = (fromS: number, toS: number): PlacedRun => {
			const kept = [...placed.channels.timeS.keys()].filter(
				(i) => !(placed.channels.timeS[i] > fromS && placed.channels.timeS[i] < toS)
			);
			const pick = (values: Float64Array) => Float64Array.from(kept, (i) => values[i]);
			const { timeS, speedKmh: speed, distanceM, brakePct: brake, throttlePct: throttle } = placed.channels;
			return {
				...placed,
				placeM: pick(placed.placeM),
				curvaturePerM: placed.curvaturePerM && pick(placed.curvaturePerM),
				channels: {
					...placed.channels,
					timeS: pick(timeS),
					speedKmh: pick(speed),
					distanceM: pick(distanceM),
					brakePct: brake && pick(brake),
					throttlePct: throttle && pick(throttle)
				}
			};
		};
		const [middle] = measureRun(without(5.1, 6.2), [corner]).metrics;
		expect(middle.minKmh).toBeNull();
		expect(middle.fullThrottleM).toBeNull();
		expect(middle.reasons).toMatchObject({ minKmh: 'gap', fullThrottleM: 'gap' });
		expectPlace(middle.onsetM, 2 + 0.1 * (5 / 80));
		const [early] = measureRun(without(1.5, 2.4), [corner]).metrics;
		expect(early.onsetM).toBeNull();
		expect(early.reasons).toMatchObject({ onsetM: 'gap', liftM: 'gap', coastingS: 'gap' });
		expectPlace(early.pickUpM, 5.025);
		expect(early.minKmh).toBeCloseTo(80, 6);
	});

	it('marks peaks whose full pressure was taken from the run itself', () => {
		const placed = placedOf(base);
		const [m] = measureRun({ ...placed, channels: { ...placed.channels, brakeScaleAssumed: true } }, [corner]).metrics;
		expect(m.peakPct).toBeCloseTo(80, 6);
		expect(m.reasons.peakPct).toBe('brake_scale_assumed');
	});
});
