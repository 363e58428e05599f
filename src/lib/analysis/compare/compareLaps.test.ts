import { beforeAll, describe, expect, it } from 'vitest';
import {
	closedFormCorners,
	closedFormGrid,
	closedFormMetrics,
	readClosedForm,
	type ClosedFormTruth
} from '../../../../tests/helpers/closedForm.ts';
import { comparisonSchema, type Comparison, type CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { FindingCode } from '../../schemas/codes.ts';
import type { FullThrottleModel } from '../car/fullThrottle.ts';
import { countsOnce } from '../findings/countsOnce.ts';
import type { LapGrid } from '../model.ts';
import { compareLaps, type CompareSide } from './compareLaps.ts';
import { shortList } from './shortList.ts';

/** the car of the closed-form laps: 3.6 m/s² at every speed */
const FULL_THROTTLE: FullThrottleModel = {
	coefficients: [3.6, 0, 0],
	fromKmh: 40,
	toKmh: 210,
	residualMps2: 0.05,
	samples: 400,
	from: 'throttle'
};

let truth: ClosedFormTruth;
beforeAll(() => {
	truth = readClosedForm();
});

const side = (motion: string, lap: number): CompareSide => ({
	grid: closedFormGrid(truth, motion, lap),
	metrics: closedFormMetrics(truth, motion, lap)
});

function compare(driver: CompareSide, reference: CompareSide, run: CornerMetrics[] = []): Comparison {
	return compareLaps({
		driver,
		reference,
		corners: closedFormCorners(truth),
		run: { metrics: run, cleanLaps: [...new Set(run.map((m) => m.lap))], fullThrottle: FULL_THROTTLE }
	});
}

const sum = (values: number[]) => values.reduce((total, value) => total + value, 0);
const counted = ({ findings }: Comparison) => findings.filter(countsOnce);

describe('compareLaps on laps known in closed form', () => {
	it.each<{ motion: string; corner: number; code: FindingCode }>([
		{ motion: 'brake_early', corner: 1, code: 'brake_early' },
		{ motion: 'soft_peak', corner: 6, code: 'peak_under' },
		{ motion: 'low_min_speed', corner: 8, code: 'min_speed_low' },
		{ motion: 'late_throttle', corner: 2, code: 'pick_up_late' },
		{ motion: 'coast', corner: 7, code: 'coasting' }
	])('names $code first where a lap has it, and charges what the lap lost', ({ motion, corner, code }) => {
		const lostS = truth.laps[motion].delta_final_s ?? NaN;
		const { findings, deltaS } = compare(side(motion, 2), side('ref', 1));
		expect(deltaS).toBeCloseTo(lostS, 9);
		expect(findings[0]).toMatchObject({ corner, code });
		expect(Math.abs((findings[0].costS ?? NaN) - lostS)).toBeLessThan(0.003);
		expect(findings.slice(1).filter((f) => countsOnce(f) && (f.costS ?? 0) > 0.003)).toEqual([]);
	});

	it('charges nothing for a lower pressure with the same motion, but says it', () => {
		const { findings } = compare(side('soft_peak_pressure_only', 2), side('ref', 1));
		expect(findings.map(({ corner, code, costS }) => ({ corner, code, costS }))).toEqual([
			{ corner: 6, code: 'peak_under', costS: 0 }
		]);
	});

	it('finds nothing between a lap and itself, to the last bit', () => {
		const comparison = compare(side('ref', 1), side('ref', 1));
		expect(comparison.findings).toEqual([]);
		expect(comparison.delta.every((s) => s === 0)).toBe(true);
		expect(comparison.ledger.every((row) => row.totalS === 0)).toBe(true);
	});

	it('holds the driver’s own Δ against the closed form at every second metre', () => {
		const { delta } = compare(side('low_min_speed', 2), side('ref', 1));
		const table = truth.laps.low_min_speed.delta_every_2_m_of_reference_distance_s ?? [];
		const worst = Math.max(...table.slice(0, -1).map((s, i) => Math.abs(delta[2 * i] - s)));
		expect(worst).toBeLessThan(1e-6);
	});

	it('carries a slow exit down the straight and says so at the next corner', () => {
		const { findings, ledger } = compare(side('late_throttle', 2), side('ref', 1));
		const late = findings[0];
		expect(late.shares.map((share) => share.corner)).toEqual([2, 3]);
		expect(findings[1]).toMatchObject({ corner: 3, code: 'carried_in' });
		expect(findings[1].costS).toBeCloseTo(late.shares[1].costS, 9);
		expect(findings[1].costS).toBeCloseTo(ledger[3].totalS, 2);
	});
});

/** One lap with several of the altered corners: their Δ add up, since each is over before the next begins. */
function several(motions: string[], lap: number): CompareSide {
	const reference = closedFormGrid(truth, 'ref', lap);
	const grids = motions.map((motion) => closedFormGrid(truth, motion, lap));
	const pick = (column: 'speedKmh' | 'brakePct' | 'throttlePct') =>
		Float64Array.from(reference[column] ?? [], (value, i) => {
			const other = grids.map((grid) => grid[column]?.[i] ?? value).find((v) => Math.abs(v - value) > 1e-9);
			return other ?? value;
		});
	const grid: LapGrid = {
		...reference,
		timeS: reference.timeS.map((s, i) => s + sum(grids.map((g) => g.timeS[i] - s))),
		lapTimeS: reference.lapTimeS + sum(grids.map((g) => g.lapTimeS - reference.lapTimeS)),
		speedKmh: pick('speedKmh'),
		brakePct: pick('brakePct'),
		throttlePct: pick('throttlePct')
	};
	const metrics = closedFormMetrics(truth, 'ref', lap).map((own, i) => {
		const motion = motions.find((one) => truth.laps[one].altered.corner === own.corner);
		return motion ? closedFormMetrics(truth, motion, lap)[i] : own;
	});
	return { grid, metrics };
}

describe('compareLaps on a lap with several causes', () => {
	const motions = ['brake_early', 'late_throttle', 'soft_peak', 'coast', 'low_min_speed'];

	it('names each at its corner with its own cost', () => {
		const comparison = compare(several(motions, 2), side('ref', 1));
		const said = counted(comparison).filter(({ costS }) => (costS ?? 0) > 0.01);
		expect(said.map(({ corner, code }) => `${corner} ${code}`)).toEqual([
			'6 peak_under',
			'1 brake_early',
			'2 pick_up_late',
			'8 min_speed_low',
			'7 coasting'
		]);
		for (const { corner, costS } of said) {
			const motion = motions.find((m) => truth.laps[m].altered.corner === corner) ?? '';
			expect(Math.abs((costS ?? NaN) - (truth.laps[motion].delta_final_s ?? NaN))).toBeLessThan(0.005);
		}
	});

	it('adds up: shares to costs, rows to shares and the rest, costs and rests to the gap', () => {
		const comparison = compare(several(motions, 2), side('ref', 1));
		const { findings, unexplained, ledger, deltaS } = comparison;
		for (const { shares, costS } of counted(comparison))
			expect(sum(shares.map((share) => share.costS))).toBeCloseTo(costS ?? NaN, 12);
		for (const row of ledger) {
			const own = findings.flatMap(({ shares }) => shares).filter((share) => share.corner === row.corner);
			const rest = unexplained.find(({ corner }) => corner === row.corner)?.costS ?? NaN;
			expect(sum(own.map(({ costS }) => costS)) + rest).toBeCloseTo(row.totalS, 12);
		}
		const total = sum(counted(comparison).map(({ costS }) => costS ?? 0)) + sum(unexplained.map(({ costS }) => costS));
		expect(total).toBeCloseTo(deltaS, 9);
		expect(sum(ledger.map((row) => row.totalS))).toBeCloseTo(deltaS, 9);
	});

	it('proposes the smallest set that holds half of the gap', () => {
		const comparison = compare(several(motions, 2), side('ref', 1));
		const listed = shortList(comparison);
		expect(listed.map(({ code }) => code)).toEqual(['peak_under', 'brake_early']);
		expect(sum(listed.map(({ costS }) => costS ?? 0))).toBeGreaterThanOrEqual(comparison.deltaS / 2);
		expect(shortList({ ...comparison, deltaS: -0.2 })).toEqual([]);
	});

	it('reads the same from the other side: what one lost the other found', () => {
		const there = compare(several(motions, 2), side('ref', 1));
		const back = compare(side('ref', 1), several(motions, 2));
		expect(back.deltaS).toBe(-there.deltaS);
		back.ledger.forEach((row, i) => expect(row.totalS).toBeCloseTo(-there.ledger[i].totalS, 9));
		expect(counted(back).filter(({ costS }) => (costS ?? 0) > 0.003)).toEqual([]);
	});
});

describe('compareLaps and what a lap shows again', () => {
	const laps = (shown: number, of: number) =>
		Array.from({ length: of }, (_, i) => closedFormMetrics(truth, i < shown ? 'brake_early' : 'ref', i + 1)).flat();

	it.each([
		{ shown: 5, of: 5, habit: true },
		{ shown: 4, of: 5, habit: true },
		{ shown: 3, of: 5, habit: false },
		{ shown: 4, of: 4, habit: null }
	])('$shown of $of clean laps: habit $habit', ({ shown, of, habit }) => {
		const [finding] = compare(side('brake_early', 1), side('ref', 99), laps(shown, of)).findings;
		expect(finding.habit).toBe(habit);
		expect(finding.habitLaps).toEqual(habit === null ? null : { shown, of });
	});
});

describe('compareLaps with less than everything', () => {
	const without = (lap: CompareSide): CompareSide => ({
		grid: { ...lap.grid, brakePct: null, throttlePct: null },
		metrics: lap.metrics.map((m) => ({
			...m,
			onsetM: null,
			onsetS: null,
			peakPct: null,
			releaseStartM: null,
			releaseEndM: null,
			releaseS: null,
			liftM: null,
			pickUpM: null,
			fullThrottleM: null,
			coastingS: null,
			secondLiftS: null,
			lightHoldS: null
		}))
	});

	it('still tells a low minimum speed by speed alone', () => {
		const comparison = compare(without(side('low_min_speed', 2)), without(side('ref', 1)));
		expect(comparison.findings[0]).toMatchObject({ corner: 8, code: 'min_speed_low' });
		expect(comparisonSchema.safeParse(comparison).success).toBe(true);
	});

	it('bridges a stretch without samples and still sums to the gap', () => {
		const lap = side('brake_early', 2);
		const timeS = lap.grid.timeS.slice();
		timeS.fill(NaN, 900, 960);
		const { delta, ledger, deltaS } = compare({ ...lap, grid: { ...lap.grid, timeS } }, side('ref', 1));
		expect(delta.every(Number.isFinite)).toBe(true);
		expect(sum(ledger.map((row) => row.totalS))).toBeCloseTo(deltaS, 9);
	});

	it('leaves its inputs as they were', () => {
		const driver = side('coast', 2);
		const reference = side('ref', 1);
		const copy = structuredClone({ driver, reference });
		compare(driver, reference);
		expect({ driver, reference }).toEqual(copy);
	});
});
