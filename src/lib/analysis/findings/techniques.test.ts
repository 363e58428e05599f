import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { layCircuit, plannedLap } from '../../../../tests/helpers/plannedLap.ts';
import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { FindingCode } from '../../schemas/codes.ts';
import { compareLaps, type CompareSide } from '../compare/compareLaps.ts';
import type { LapGrid } from '../model.ts';

/** Four corners of different speed, so that no rule leans on one of them. */
const CIRCUIT = layCircuit([
	{ straightM: 420, minMps: 14, plateauM: 30 },
	{ straightM: 260, minMps: 26, plateauM: 45 },
	{ straightM: 500, minMps: 19, plateauM: 25 },
	{ straightM: 330, minMps: 33, plateauM: 40 }
]);

type Change = Partial<CornerMetrics>;

/** The same motion with other metrics in one corner: nothing to charge, something to say. */
function alter(side: CompareSide, corner: number, change: Change): CompareSide {
	return { ...side, metrics: side.metrics.map((m) => (m.corner === corner ? { ...m, ...change } : m)) };
}

function codesAt(
	corner: number,
	driver: CompareSide,
	reference: CompareSide,
	laps: CornerMetrics[] = []
): { codes: FindingCode[]; text: string } {
	const { findings } = compareLaps({
		driver,
		reference,
		corners: CIRCUIT.corners,
		run: { metrics: laps, cleanLaps: [...new Set(laps.map(({ lap }) => lap))], fullThrottle: null }
	});
	// the same motion is charged with nothing, and what is said is said of the altered corner
	for (const { costS, corner: at } of findings) expect([Math.abs(costS ?? 0) < 1e-9, at]).toEqual([true, corner]);
	return {
		codes: findings.map(({ code }) => code),
		text: findings.map(({ text }) => text.replaceAll('\u00a0', ' ')).join(' ')
	};
}

interface Technique {
	code: FindingCode;
	/** what both laps have, beside the planned metrics */
	both?: Change;
	/** a size from 0 (just enough to be said) to 1 */
	mistake: (size: number, m: CornerMetrics) => Change;
	/** within the same technique, or within what can be measured */
	harmless: Change | ((m: CornerMetrics) => Change);
	text: RegExp;
}

const TECHNIQUES: Technique[] = [
	{
		code: 'pedal_change_slow',
		both: { coastBeforeS: 0.1 },
		mistake: (size) => ({ coastBeforeS: 0.22 + 0.25 * size }),
		harmless: { coastBeforeS: 0.18 },
		text: /^Takes 0\.\d+ s, not 0\.1\d? s, to change from throttle to brake\.$/
	},
	{
		code: 'pedal_overlap',
		mistake: (size) => ({ overlapS: 0.25 + size }),
		harmless: { overlapS: 0.15 },
		text: /^Both pedals pressed for/
	},
	{
		code: 'release_uneven',
		mistake: () => ({ releaseProgressive: false }),
		harmless: { releaseProgressive: null },
		text: /^Lets the brake go unevenly, over 0\.80? s/
	},
	{
		code: 'release_abrupt',
		mistake: (size) => ({ releaseS: 0.45 - 0.35 * size }),
		harmless: { releaseS: 0.6 },
		text: /^Lets the brake go within/
	},
	{
		code: 'release_long',
		mistake: (size) => ({ releaseS: 1.35 + size }),
		harmless: { releaseS: 1 },
		text: /^Lets the brake go over/
	},
	{
		code: 'rise_quick',
		both: { riseS: 0.3 },
		mistake: (size) => ({ riseS: 0.14 - 0.1 * size }),
		harmless: { riseS: 0.22 },
		text: /^Reaches the peak in/
	},
	{
		code: 'second_dab',
		mistake: (size) => ({ dabs: 1 + Math.round(3 * size) }),
		harmless: { dabs: 0 },
		text: /^Further dabs/
	},
	{
		code: 'hold_missing',
		both: { lightHoldS: 0.6, holdPct: 8 },
		mistake: () => ({ lightHoldS: 0, holdPct: null }),
		harmless: { lightHoldS: 0.5 },
		text: /^No light hold|^Holds the brake lightly for 0/
	},
	{
		code: 'hold_short',
		both: { lightHoldS: 0.7, holdPct: 8 },
		mistake: (size) => ({ lightHoldS: 0.3 - 0.1 * size }),
		harmless: { lightHoldS: 0.45 },
		text: /^Holds the brake lightly for only/
	},
	{
		code: 'hold_strong',
		both: { lightHoldS: 0.6, holdPct: 8 },
		mistake: (size) => ({ lightHoldS: 0, holdPct: 14 + 9 * size }),
		harmless: { lightHoldS: 0.6, holdPct: 11 },
		text: /^Holds the brake at \d+ %, not 8 %, while turning, where the reference holds it lightly for 0\.6 s\.$/
	},
	{
		code: 'turn_in_early',
		mistake: (size, m) => ({ turnInM: (m.turnInM ?? 0) - 7 - 15 * size }),
		harmless: (m) => ({ turnInM: (m.turnInM ?? 0) - 4 }),
		text: /^Turns in \d+ m early/
	},
	{
		code: 'turn_in_late',
		mistake: (size, m) => ({ turnInM: (m.turnInM ?? 0) + 7 + 15 * size }),
		harmless: (m) => ({ turnInM: (m.turnInM ?? 0) + 4 }),
		text: /^Turns in \d+ m late/
	},
	{
		code: 'wheelspin',
		both: { spinS: 0 },
		mistake: (size) => ({ spinS: 0.2 + size }),
		harmless: { spinS: 0.1 },
		text: /^Spins a wheel for/
	},
	{
		code: 'steering_corrections',
		both: { steerCorrections: 1 },
		mistake: (size) => ({ steerCorrections: 3 + Math.round(3 * size) }),
		harmless: { steerCorrections: 2 },
		text: /^Corrects the steering \d times in the corner, not 1\.$/
	},
	{
		code: 'lock_up',
		both: { lockUps: 0, rearLocks: 0 },
		mistake: (size) => ({ lockUps: 1 + Math.round(size), lockWheels: 'fl fr' }),
		harmless: { lockUps: 0 },
		text: /^Locks the front left and the front right\. Lock-ups: \d, not 0\. Check for a flat spot\.$/
	},
	{
		code: 'rear_lock',
		both: { lockUps: 0, rearLocks: 0 },
		mistake: (size) => ({ lockUps: 1, rearLocks: 1 + Math.round(size), lockWheels: 'rl' }),
		harmless: { lockUps: 0 },
		text: /^Locks the rear left at a downshift/
	},
	{
		code: 'peak_over',
		mistake: (size, m) => ({ peakPct: (m.peakPct ?? 0) + 9 + size }),
		harmless: (m) => ({ peakPct: (m.peakPct ?? 0) + 5 }),
		text: /^Peaks at/
	},
	{
		code: 'peak_under',
		mistake: (size, m) => ({ peakPct: (m.peakPct ?? 0) - 9 - 20 * size }),
		harmless: (m) => ({ peakPct: (m.peakPct ?? 0) - 5 }),
		text: /^Peaks at/
	}
];

describe('techniquesOf, on laps of one motion', () => {
	it.each(TECHNIQUES)(
		'names $code in any corner and at any size, and nothing else',
		({ code, both, mistake, text }) => {
			fc.assert(
				fc.property(fc.integer({ min: 1, max: 4 }), fc.double({ min: 0, max: 1, noNaN: true }), (corner, size) => {
					const reference = alter(plannedLap(CIRCUIT, 1), corner, both ?? {});
					const own = reference.metrics.find((m) => m.corner === corner);
					const said = codesAt(corner, alter(reference, corner, own ? mistake(size, own) : {}), reference);
					expect(said.codes).toEqual([code]);
					expect(said.text).toMatch(text);
				}),
				{ seed: 4, numRuns: 12 }
			);
		}
	);

	it.each(TECHNIQUES)('keeps silent about $code within the same technique', ({ both, harmless }) => {
		for (const { number } of CIRCUIT.corners) {
			const corner = number ?? 0;
			const reference = alter(plannedLap(CIRCUIT, 1), corner, both ?? {});
			const own = reference.metrics[corner - 1];
			const change = typeof harmless === 'function' ? harmless(own) : harmless;
			expect(codesAt(corner, alter(reference, corner, change), reference).codes).toEqual([]);
		}
	});

	it('says nothing of a difference within what a coarse recording can tell', () => {
		const reference = plannedLap(CIRCUIT, 1);
		const { turnInM } = reference.metrics[0];
		const coarse = alter(reference, 1, { turnInM: (turnInM ?? 0) + 9, plusMinus: { turnInM: 12 } });
		expect(codesAt(1, coarse, reference).codes).toEqual([]);
	});

	it('says nothing of too much pressure where full pressure was only guessed', () => {
		const guessed: Change = { reasons: { peakPct: 'brake_scale_assumed' } };
		const reference = alter(plannedLap(CIRCUIT, 1), 2, guessed);
		const { peakPct } = reference.metrics[1];
		expect(codesAt(2, alter(reference, 2, { peakPct: (peakPct ?? 0) + 9.5 }), reference).codes).toEqual([]);
	});
});

describe('harder brings no more', () => {
	const reference = alter(plannedLap(CIRCUIT, 1), 3, { brakedMps2: 9.6, peakPct: 75 });
	const harder = (lap: number, brakedMps2: number): CornerMetrics => ({
		...reference.metrics[2],
		lap,
		peakPct: 92,
		brakedMps2
	});

	it('is said of a peak that brought no more deceleration in several laps', () => {
		const laps = [2, 3, 4].map((lap) => harder(lap, 9.5));
		const driver = alter(reference, 3, laps[0]);
		const said = codesAt(3, driver, reference, laps);
		expect(said.codes).toEqual(['harder_no_gain']);
		expect(said.text).toBe(
			'Peaks at 92 %, not 75 % in 3 laps, and slows no harder: 9.5 m/s². The tyres, a system or the brakes give no more.'
		);
	});

	it.each([
		{ name: 'it did slow harder', laps: [2, 3, 4].map((lap) => harder(lap, 10.4)) },
		{ name: 'only two laps show it', laps: [2, 3].map((lap) => harder(lap, 9.5)) },
		{ name: 'the laps arrive at another speed', laps: [2, 3, 4].map((lap) => ({ ...harder(lap, 9.5), entryKmh: 190 })) }
	])('is not said where $name', ({ laps }) => {
		expect(
			codesAt(3, alter(reference, 3, { ...laps[0], entryKmh: reference.metrics[2].entryKmh }), reference, laps).codes
		).toEqual(['peak_over']);
	});
});

describe('spreads', () => {
	const reference = plannedLap(CIRCUIT, 1);
	const laps = (field: 'onsetM' | 'minKmh', steps: number[]) =>
		steps.map((by, i): CornerMetrics => ({
			...reference.metrics[1],
			lap: i + 2,
			[field]: (reference.metrics[1][field] ?? 0) + by
		}));

	it.each([
		{ field: 'onsetM' as const, steps: [-9, 8, -7, 10, 0], codes: ['spread_onset'] },
		{ field: 'onsetM' as const, steps: [-2, 2, -1, 1, 0], codes: [] },
		{ field: 'onsetM' as const, steps: [-9, 8, -7, 10], codes: [] },
		{ field: 'minKmh' as const, steps: [-4, 4, -3, 3, 0], codes: ['spread_min_speed'] },
		{ field: 'minKmh' as const, steps: [-1, 1, -1, 1, 0], codes: [] }
	])('$field over laps $steps: $codes', ({ field, steps, codes }) => {
		expect(codesAt(2, reference, reference, laps(field, steps)).codes).toEqual(codes);
	});
});

/** The same motion with columns of its own. */
const withColumns = (side: CompareSide, columns: Partial<LapGrid>): CompareSide => ({
	...side,
	grid: { ...side.grid, ...columns }
});

describe('what only traces tell', () => {
	const plain = plannedLap(CIRCUIT, 1);
	const { marginM } = plain.grid;
	const column = (of: (placeM: number) => number) => plain.grid.speedKmh.map((_, i) => of(i - marginM));
	const inCorner = (k: number) => (m: number) =>
		m >= CIRCUIT.corners[k].startM - 10 && m <= CIRCUIT.corners[k].endM + 10;

	it('names scrub: more steering, no more curvature', () => {
		const curvaturePerM = column((m) => (inCorner(0)(m) ? 1 / 25 : 0));
		const steering = (deg: number) =>
			withColumns(plain, { curvaturePerM, steeringDeg: column((m) => (inCorner(0)(m) ? deg : 0)) });
		const said = codesAt(1, steering(130), steering(90));
		expect(said.codes).toEqual(['scrub']);
		expect(said.text).toBe(
			'Steers 130 °, not 90 °, and turns no tighter: a radius of 25.0 m, not 25.0 m. The front tyres scrub.'
		);
		expect(codesAt(1, steering(100), steering(90)).codes).toEqual([]);
		const tighter = withColumns(steering(130), { curvaturePerM: column((m) => (inCorner(0)(m) ? 1 / 20 : 0)) });
		expect(codesAt(1, tighter, steering(90)).codes).not.toContain('scrub');
	});

	it('names another gear at the apex, and no gear that is just changing', () => {
		const gears = (gear: number) => withColumns(plain, { gear: column((m) => (inCorner(2)(m) ? gear : 4)) });
		expect(codesAt(3, gears(3), gears(2)).codes).toEqual(['gear_other']);
		expect(codesAt(3, gears(2), gears(2)).codes).toEqual([]);
	});

	it('names a short shift: from the same gear at a clearly lower engine speed', () => {
		const endM = Math.round(CIRCUIT.corners[0].endM);
		const shifts = (rpm: number) => {
			const at = endM + 60;
			return withColumns(plain, {
				gear: column((m) => (m > endM - 80 && m <= at ? 2 : 3)),
				engineSpeedRpm: column((m) => (m > endM && m <= at ? rpm * (0.6 + (0.4 * (m - endM)) / 60) : 4000))
			});
		};
		const said = codesAt(1, shifts(6100), shifts(7000));
		expect(said.codes).toEqual(['short_shift']);
		expect(said.text).toMatch(/^Shifts up at 6100 1\/min, not 7000 1\/min, at \d+ m\.$/);
		expect(codesAt(1, shifts(6700), shifts(7000)).codes).toEqual([]);
	});
});
