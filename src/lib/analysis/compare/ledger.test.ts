import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { deltaAt, type DeltaTrace } from './deltaTrace.ts';
import { cornerBorders, cutLedger, type CornerBorders } from './ledger.ts';
import type { CornerPlaces, LapPlaces } from './cornerPlaces.ts';

const nowhere: LapPlaces = {
	liftM: null,
	onsetM: null,
	releaseStartM: null,
	releaseEndM: null,
	turnInM: null,
	minSpeedM: null,
	pickUpM: null,
	fullThrottleM: null,
	flat: false
};

const place = (driver: Partial<LapPlaces>, reference: Partial<LapPlaces>): CornerPlaces => ({
	corner: {
		number: 4,
		startM: 400,
		apexM: 450,
		apex2M: null,
		endM: 520,
		direction: 'left',
		minRadiusM: 40,
		angleDeg: 90,
		linkedTo: null,
		kind: 'braked'
	},
	number: 4,
	startM: 400,
	apexM: 450,
	endM: 520,
	driver: { ...nowhere, ...driver },
	reference: { ...nowhere, ...reference }
});

describe('cornerBorders', () => {
	it.each([
		{
			name: 'begins at the earlier onset, turns in where the reference does, picks up at the earlier pick-up',
			driver: { onsetM: 330, turnInM: 390, pickUpM: 470 },
			reference: { onsetM: 342, turnInM: 396, pickUpM: 462 },
			expected: { entryM: 330, midM: 396, exitM: 462, cornerEndM: 520 }
		},
		{
			name: 'begins at a lift that comes before both onsets',
			driver: { liftM: 321, onsetM: 345 },
			reference: { liftM: 340, onsetM: 342 },
			expected: { entryM: 321, midM: 400, exitM: 450, cornerEndM: 520 }
		},
		{
			name: 'begins at the corner where neither lap brakes or lifts',
			driver: {},
			reference: {},
			expected: { entryM: 400, midM: 400, exitM: 450, cornerEndM: 520 }
		},
		{
			name: 'holds a pick-up before turn-in to turn-in and one beyond the end to the end',
			driver: { onsetM: 350, pickUpM: 380 },
			reference: { onsetM: 350, turnInM: 405, pickUpM: 600 },
			expected: { entryM: 350, midM: 405, exitM: 405, cornerEndM: 520 }
		},
		{
			name: 'does not begin at a lift in mid-corner',
			driver: { liftM: 440 },
			reference: { liftM: 441, turnInM: 398 },
			expected: { entryM: 398, midM: 398, exitM: 450, cornerEndM: 520 }
		}
	])('$name', ({ driver, reference, expected }) => {
		expect(cornerBorders(place(driver, reference))).toEqual({ number: 4, ...expected });
	});
});

const traces = fc
	.record({
		lengthM: fc.double({ min: 40, max: 400, noNaN: true }),
		finalS: fc.double({ min: -3, max: 3, noNaN: true }),
		seed: fc.array(fc.double({ min: -3, max: 3, noNaN: true }), { minLength: 401, maxLength: 401 })
	})
	.map(({ lengthM, finalS, seed }): DeltaTrace => {
		const deltaS = Float64Array.from(seed.slice(0, Math.floor(lengthM) + 1));
		deltaS[0] = 0;
		return { lengthM, deltaS, finalS, measured: new Uint8Array(deltaS.length).fill(1) };
	});
const borders = fc
	.array(
		fc.record({
			entryM: fc.double({ min: -100, max: 500, noNaN: true }),
			midM: fc.double({ min: -100, max: 500, noNaN: true }),
			exitM: fc.double({ min: -100, max: 500, noNaN: true }),
			cornerEndM: fc.double({ min: -100, max: 500, noNaN: true })
		}),
		{ maxLength: 12 }
	)
	.map((list): CornerBorders[] => list.map((one, i) => ({ number: i + 1, ...one })));

describe('cutLedger', () => {
	it('sums to the gap within 1 µs, and each row to its parts, whatever the borders are', () => {
		fc.assert(
			fc.property(traces, borders, (trace, corners) => {
				const rows = cutLedger(trace, corners);
				const sum = rows.reduce((total, row) => total + row.totalS, 0);
				expect(Math.abs(sum - trace.finalS)).toBeLessThan(1e-9);
				for (const row of rows) expect(row.entryS + row.midS + row.exitS).toBe(row.totalS);
			}),
			{ seed: 7, numRuns: 300 }
		);
	});

	it('leaves no metre out and counts none twice: borders never run backwards and stay in the lap', () => {
		fc.assert(
			fc.property(traces, borders, (trace, corners) => {
				const rows = cutLedger(trace, corners);
				let reachedM = 0;
				for (const row of rows) {
					expect(row.entryM).toBe(reachedM);
					expect(row.midM).toBeGreaterThanOrEqual(row.entryM);
					expect(row.exitM).toBeGreaterThanOrEqual(row.midM);
					expect(row.endM).toBeGreaterThanOrEqual(row.exitM);
					reachedM = row.endM;
				}
				expect(reachedM).toBe(trace.lengthM);
			}),
			{ seed: 8, numRuns: 300 }
		);
	});

	it('is the negative of itself when the two laps change places', () => {
		fc.assert(
			fc.property(traces, borders, (trace, corners) => {
				const swapped = { ...trace, deltaS: trace.deltaS.map((s) => -s), finalS: -trace.finalS };
				const rows = cutLedger(trace, corners);
				cutLedger(swapped, corners).forEach((row, i) => {
					expect(row.totalS + rows[i].totalS).toBeCloseTo(0, 12);
					expect(row.straightS + rows[i].straightS).toBeCloseTo(0, 12);
				});
			}),
			{ seed: 9, numRuns: 100 }
		);
	});

	it('puts all of it into the run-up where the circuit has no corner', () => {
		const trace: DeltaTrace = {
			lengthM: 2.5,
			deltaS: Float64Array.of(0, 0.1, 0.2),
			finalS: 0.4,
			measured: new Uint8Array(3)
		};
		expect(cutLedger(trace, [])).toEqual([
			{
				corner: 0,
				entryS: 0.4,
				midS: 0,
				exitS: 0,
				straightS: 0,
				totalS: 0.4,
				entryM: 0,
				midM: 2.5,
				exitM: 2.5,
				endM: 2.5
			}
		]);
	});

	it('gives a corner that the line cuts what it costs before the line, and the run-up what it costs after', () => {
		const trace: DeltaTrace = {
			lengthM: 100,
			deltaS: Float64Array.from({ length: 101 }, (_, i) => i / 100),
			finalS: 1,
			measured: new Uint8Array(101)
		};
		const rows = cutLedger(trace, [
			{ number: 1, entryM: 30, midM: 40, exitM: 50, cornerEndM: 60 },
			{ number: 2, entryM: 80, midM: 90, exitM: 102, cornerEndM: 110 }
		]);
		expect(rows.map((row) => row.totalS)).toEqual([
			expect.closeTo(0.3, 12),
			expect.closeTo(0.5, 12),
			expect.closeTo(0.2, 12)
		]);
		expect(rows[1].straightS).toBeCloseTo(0.2, 12);
		expect(rows[2].exitS).toBe(0);
	});
});

describe('deltaAt', () => {
	it('runs on to the exact lap times beyond the last whole metre', () => {
		const trace: DeltaTrace = {
			lengthM: 2.5,
			deltaS: Float64Array.of(0, 0.1, 0.2),
			finalS: 0.4,
			measured: new Uint8Array(3)
		};
		expect([-1, 0.5, 2, 2.25, 2.5, 3].map((m) => deltaAt(trace, m))).toEqual([
			0,
			0.05,
			0.2,
			expect.closeTo(0.3, 12),
			0.4,
			0.4
		]);
	});
});
