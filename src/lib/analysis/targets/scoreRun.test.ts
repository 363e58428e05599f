import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { closedFormCorners, closedFormMetrics, readClosedForm } from '../../../../tests/helpers/closedForm.ts';
import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import { targetSchema, type Target, type TargetKind } from '../../schemas/target.ts';
import { measureRun } from '../metrics/measureRun.ts';
import { readClosedForm as readSampled, sampleRun } from '../metrics/testing/closedForm.ts';
import { meanDifference } from './meanDifference.ts';
import { scoreRun, type ScoredLap, type ScoredRun } from './scoreRun.ts';
import { MEASURED_KINDS, type MeasuredTargetKind } from './targetKinds.ts';

const truth = readClosedForm();
const LENGTH_M = 2200;
const NO_BASES = { own: [], reference: null };

function target(kind: TargetKind, limits: Partial<Target> = {}): Target {
	return targetSchema.parse({
		kind,
		least: null,
		most: null,
		base: 'value',
		scope: { dryOnly: false, afterLap: null, holdsOver: null },
		notSlower: false,
		text: '',
		...limits
	});
}

const lapNumbered = (number: number, more: Partial<ScoredLap> = {}): ScoredLap => ({
	number,
	kind: 'timed',
	clean: true,
	reasons: [],
	timeS: 70,
	plusMinusS: 0,
	...more
});

const passOf = (lap: number, more: Partial<CornerMetrics>): CornerMetrics => ({
	...closedFormMetrics(truth, 'ref', lap)[0],
	...more,
	lap
});

function runOf(passes: CornerMetrics[], more: Partial<ScoredRun> = {}): ScoredRun {
	const laps = passes.map(({ lap }) => lapNumbered(lap));
	return { conditions: 'dry', laps, metrics: passes, lengthM: LENGTH_M, ...more };
}

const outcomes = (asked: Target, run: ScoredRun, bases = NO_BASES as Parameters<typeof scoreRun>[2]) =>
	scoreRun(asked, run, bases).laps.map(({ outcome, reason }) => reason ?? outcome);

describe('scoreRun on closed-form laps', () => {
	// The file's own sampling and measuring, the truth in closed form: fixtures/closed-form. Margins are the bars at 60 Hz.
	const sampled = readSampled();
	const corners = closedFormCorners(truth);
	const run = sampleRun(sampled, { rateHz: 60, phase: 0.35, laps: ['ref'] });
	const { metrics } = measureRun(run, corners);
	const known = closedFormMetrics(truth, 'ref', 1);
	const margins: Partial<Record<MeasuredTargetKind, number>> = {
		peak_brake: 2,
		onset: 0.6,
		light_hold: 0.04,
		minimum_speed: 0.1,
		approach_speed: 0.2,
		exit_speed: 0.2,
		pick_up: 0.3,
		coasting: 0.02
	};

	it.each(Object.entries(margins))(
		'scores %s right on both sides of its limit, at every corner that has it',
		(name, margin) => {
			const kind = name as keyof typeof margins;
			const { field } = MEASURED_KINDS[kind];
			let told = 0;
			for (const exact of known) {
				const value = exact[field];
				const measured = metrics.filter(({ lap, corner }) => lap === 1 && corner === exact.corner);
				if (typeof value !== 'number' || measured.length === 0 || measured[0][field] === null) continue;
				const one = { ...runOf(measured), laps: [lapNumbered(1)] };
				expect(outcomes(target(kind, { most: value + margin }), one), `corner ${exact.corner}, under`).toEqual(['met']);
				expect(outcomes(target(kind, { least: value - margin }), one), `corner ${exact.corner}, over`).toEqual(['met']);
				const wide = margin + (measured[0].plusMinus[field] ?? 0) + 1e-9;
				expect(outcomes(target(kind, { most: value - wide }), one), `corner ${exact.corner}, above`).toEqual([
					'missed'
				]);
				expect(outcomes(target(kind, { least: value + wide }), one), `corner ${exact.corner}, below`).toEqual([
					'missed'
				]);
				told++;
			}
			expect(told).toBeGreaterThan(2);
		}
	);
});

describe('scoreRun', () => {
	it('scores every measured kind on both sides of its limit', () => {
		for (const kind of Object.keys(MEASURED_KINDS) as MeasuredTargetKind[]) {
			if (['one_application', 'no_second_lift', 'no_lock_up'].includes(kind)) continue;
			const { field } = MEASURED_KINDS[kind];
			const run = runOf([passOf(1, { [field]: 10 }), passOf(2, { [field]: 11 })]);
			expect(outcomes(target(kind, { most: 10.5 }), run), kind).toEqual(['met', 'missed']);
			expect(outcomes(target(kind, { least: 10.5 }), run), kind).toEqual(['missed', 'met']);
			expect(outcomes(target(kind, { least: 10, most: 10.5 }), run), kind).toEqual(['met', 'missed']);
		}
	});

	it('counts applications, second lifts and lock-ups without a limit', () => {
		expect(outcomes(target('one_application'), runOf([passOf(1, { dabs: 0 }), passOf(2, { dabs: 1 })]))).toEqual([
			'met',
			'missed'
		]);
		expect(outcomes(target('no_lock_up'), runOf([passOf(1, { lockUps: 0 }), passOf(2, { lockUps: 2 })]))).toEqual([
			'met',
			'missed'
		]);
		const lifts = runOf([passOf(1, { secondLiftS: null }), passOf(2, { secondLiftS: 0.4 })]);
		expect(outcomes(target('no_second_lift'), lifts)).toEqual(['met', 'missed']);
	});

	it('never claims a lock-up target where there are no wheel speeds', () => {
		expect(outcomes(target('no_lock_up'), runOf([passOf(1, { lockUps: null })]))).toEqual(['not_measured']);
	});

	it('takes a value beyond the limit by no more than its ± as met, and says so', () => {
		const run = runOf([passOf(1, { onsetM: 413, plusMinus: { onsetM: 4 } })]);
		const [near] = scoreRun(target('onset', { most: 410 }), run, NO_BASES).laps;
		expect(near).toMatchObject({ outcome: 'met', withinUncertainty: true, missedBy: 0, value: 413 });
		const [far] = scoreRun(target('onset', { most: 408 }), run, NO_BASES).laps;
		expect(far).toMatchObject({ outcome: 'missed', withinUncertainty: false, missedBy: 5 });
	});

	it('compares places across the line the short way round', () => {
		const run = runOf([passOf(1, { onsetM: LENGTH_M - 3 }), passOf(2, { onsetM: 4 })]);
		expect(outcomes(target('onset', { most: 2 }), run)).toEqual(['met', 'missed']);
		expect(outcomes(target('onset', { least: LENGTH_M - 5 }), run)).toEqual(['met', 'met']);
	});

	it('adds limits to the own median or to the reference', () => {
		const run = runOf([passOf(1, { minKmh: 84 }), passOf(2, { minKmh: 87 })]);
		const own = [80, 82, 90].map((minKmh, i) => passOf(i + 1, { minKmh }));
		const twoMore = target('minimum_speed', { least: 3, base: 'own_median' });
		expect(outcomes(twoMore, run, { own, reference: null })).toEqual(['missed', 'met']);
		expect(outcomes(twoMore, run)).toEqual(['no_base', 'no_base']);
		const asReference = target('minimum_speed', { least: -2, base: 'reference' });
		expect(outcomes(asReference, run, { own: [], reference: passOf(9, { minKmh: 88 }) })).toEqual(['missed', 'met']);
	});

	it('leaves out what the scope does not ask for, with the reason', () => {
		const asked = target('minimum_speed', {
			least: 50,
			scope: { dryOnly: true, afterLap: 1, holdsOver: null }
		});
		const passes = [1, 2, 3, 4].map((lap) => passOf(lap, { minKmh: 60 }));
		const laps = [
			lapNumbered(1),
			lapNumbered(2),
			lapNumbered(3, { clean: false, reasons: ['off_path'] }),
			lapNumbered(4, { clean: false, reasons: ['neutralised'] }),
			lapNumbered(5, { kind: 'in' })
		];
		expect(outcomes(asked, runOf(passes, { laps }))).toEqual(['early_lap', 'met', 'not_clean', 'neutralised']);
		expect(outcomes(asked, runOf(passes, { laps, conditions: 'wet' }))[1]).toBe('not_dry');
		expect(outcomes(asked, runOf(passes, { laps, conditions: 'unknown' }))[1]).toBe('not_dry');
		expect(outcomes(target('free', { text: 'Look to the exit' }), runOf(passes))[0]).toBe('free_text');
	});

	it('judges a spread once for the run, and not from too few laps', () => {
		const places = [400, 402, 398, 401];
		const steady = runOf(places.map((onsetM, i) => passOf(i + 1, { onsetM })));
		expect(outcomes(target('onset_spread', { most: 2 }), steady)).toEqual(['met', 'met', 'met', 'met']);
		expect(outcomes(target('onset_spread', { most: 1 }), steady)[0]).toBe('missed');
		expect(outcomes(target('onset_spread', { most: 2 }), runOf(steady.metrics.slice(0, 3)))[0]).toBe('too_few_laps');
		const [score] = scoreRun(target('onset_spread', { most: 2 }), steady, NO_BASES).laps;
		// s.d. of 400, 402, 398, 401 with n − 1: the sum of squares about 400.25 is 8.75
		expect(score.value).toBeCloseTo(Math.sqrt(8.75 / 3), 12);
	});

	it('scores the lap time', () => {
		const passes = [passOf(1, {}), passOf(2, {})];
		const laps = [lapNumbered(1, { timeS: 69.9 }), lapNumbered(2, { timeS: 70.2 })];
		expect(outcomes(target('lap_time', { most: 70 }), runOf(passes, { laps }))).toEqual(['met', 'missed']);
		const half = target('lap_time', { most: -0.5, base: 'own_median' });
		const bases = { own: [], ownLapTimesS: [70.4, 70.5, 70.6], reference: null };
		expect(outcomes(half, runOf(passes, { laps }), bases)).toEqual(['met', 'missed']);
	});

	it('flags a lap that met the target and was slower in the corner', () => {
		const own = [5, 5.1, 4.9].map((timeS, i) => passOf(i + 1, { timeS, peakPct: 95 }));
		const run = runOf([passOf(1, { peakPct: 70, timeS: 5.2 }), passOf(2, { peakPct: 72, timeS: 4.95 })]);
		const asked = target('peak_brake', { most: 75, notSlower: true });
		const score = scoreRun(asked, run, { own, reference: null });
		expect(score.laps.map(({ slower }) => slower)).toEqual([true, false]);
		expect(score.metButSlower).toBe(1);
		expect(scoreRun({ ...asked, notSlower: false }, run, { own, reference: null }).metButSlower).toBe(0);
	});

	it('says whether it paid, with an interval', () => {
		const run = runOf([
			...[4.8, 4.82, 4.81].map((timeS, i) => passOf(i + 1, { peakPct: 70, timeS })),
			...[5.0, 5.02, 4.99].map((timeS, i) => passOf(i + 4, { peakPct: 95, timeS }))
		]);
		const { paidS, met, scored } = scoreRun(target('peak_brake', { most: 75 }), run, NO_BASES);
		expect([met, scored]).toEqual([3, 6]);
		expect(paidS?.differenceS).toBeCloseTo(-0.1933, 3);
		expect(paidS?.high).toBeLessThan(0);
		expect(scoreRun(target('peak_brake', { most: 100 }), run, NO_BASES).paidS).toBeNull();
	});

	it('holds when enough of the last scored laps met it', () => {
		const asked = target('peak_brake', {
			most: 75,
			scope: { dryOnly: false, afterLap: null, holdsOver: { laps: 3, of: 4 } }
		});
		const peaks = (...values: number[]) => runOf(values.map((peakPct, i) => passOf(i + 1, { peakPct })));
		expect(scoreRun(asked, peaks(90, 70, 71, 90, 72), NO_BASES).holds).toBe(true);
		expect(scoreRun(asked, peaks(70, 70, 90, 90, 72), NO_BASES).holds).toBe(false);
		expect(scoreRun(asked, peaks(70, 70, 70), NO_BASES).holds).toBe(false);
		expect(scoreRun(target('peak_brake', { most: 75 }), peaks(70), NO_BASES).holds).toBeNull();
	});

	it('counts a looser limit never as harder', () => {
		fc.assert(
			fc.property(
				fc.array(fc.double({ min: 0, max: 100, noNaN: true }), { minLength: 1, maxLength: 12 }),
				fc.double({ min: 0, max: 100, noNaN: true }),
				fc.double({ min: 0, max: 20, noNaN: true }),
				(peaks, most, looser) => {
					const run = runOf(peaks.map((peakPct, i) => passOf(i + 1, { peakPct })));
					const tight = scoreRun(target('peak_brake', { most }), run, NO_BASES);
					const loose = scoreRun(target('peak_brake', { most: most + looser }), run, NO_BASES);
					expect(loose.met).toBeGreaterThanOrEqual(tight.met);
					expect(tight.scored).toBe(peaks.length);
				}
			),
			{ numRuns: 200, seed: 17 }
		);
	});
});

describe('targetSchema', () => {
	it.each([
		['a limit where none belongs', { kind: 'no_lock_up', most: 1 }],
		['no limit at all', { kind: 'onset' }],
		['a least above the most', { kind: 'onset', least: 420, most: 400 }],
		['free words without words', { kind: 'free' }],
		[
			'more laps than are driven',
			{ kind: 'no_lock_up', scope: { dryOnly: false, afterLap: null, holdsOver: { laps: 4, of: 3 } } }
		],
		['a limit that is not finite', { kind: 'onset', most: Infinity }]
	])('refuses %s', (_what, fields) => {
		const whole = {
			least: null,
			most: null,
			base: 'value',
			scope: { dryOnly: false, afterLap: null, holdsOver: null },
			notSlower: true,
			text: '',
			...fields
		};
		expect(targetSchema.safeParse(whole).success).toBe(false);
	});
});

describe('meanDifference', () => {
	it('gives the interval of a worked example', () => {
		// G. E. P. Box, J. S. Hunter, W. G. Hunter (2005), Statistics for Experimenters, boys' shoes, taken as two samples (from memory):
		// means 10.63 and 11.04; Welch's t = −0.369 on 17.987 degrees of freedom, as R's t.test gives.
		const a = [13.2, 8.2, 10.9, 14.3, 10.7, 6.6, 9.5, 10.8, 8.8, 13.3];
		const b = [14.0, 8.8, 11.2, 14.2, 11.8, 6.4, 9.8, 11.3, 9.3, 13.6];
		const found = meanDifference(a, b);
		expect(found?.differenceS).toBeCloseTo(-0.41, 12);
		expect(found?.low).toBeCloseTo(-2.745, 3);
		expect(found?.high).toBeCloseTo(1.925, 3);
	});
});
