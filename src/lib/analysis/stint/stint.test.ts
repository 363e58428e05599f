import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { gunzipSync } from 'node:zlib';
import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { stintDocumentSchema } from '../../schemas/stintDocument.ts';
import { seededNormal } from '../metrics/testing/seededNormal.ts';
import { judgeStint } from './judgeStint.ts';
import { paceDifference } from './paceDifference.ts';
import { readLapList } from './readLapList.ts';
import { fitStint } from './stintFit.ts';
import { lapsOfFuelLeft, minutesUntilALap } from './stintPlan.ts';
import { madeUpStint, type MadeUpStint } from './testing/madeUpStint.ts';

const fixture = (name: string) =>
	gunzipSync(readFileSync(fileURLToPath(new URL(`../../../../fixtures/stint/${name}.gz`, import.meta.url))));
const olsSchema = z.object({
	n: z.number(),
	ols: z.object({
		slope: z.number(),
		intercept: z.number(),
		slope_se: z.number(),
		slope_ci95: z.tuple([z.number(), z.number()]),
		residual_sd: z.number()
	}),
	theil_sen: z.object({ slope: z.number(), intercept: z.number() })
});
const truth = z
	.object({
		cases: z.array(
			z.object({
				file: z.string(),
				laps: z.number(),
				true_net_slope_s_per_lap: z.number(),
				clean_laps: z.array(z.number()),
				regression_on_clean_laps: olsSchema,
				fuel: z.object({ kg_per_lap: z.number(), s_per_kg: z.number() }).optional(),
				regression_on_clean_laps_fuel_corrected: olsSchema.optional()
			})
		)
	})
	.parse(JSON.parse(fixture('truth.json').toString())).cases;
const bytes = (text: string) => new TextEncoder().encode(text);
const lapsOf = (file: string) => readLapList(fixture(file))?.laps ?? [];

describe('fitStint', () => {
	it.each(truth)("equals scipy's linregress and theilslopes on the clean laps of $file", (stint) => {
		const clean = lapsOf(stint.file).filter((lap) => stint.clean_laps.includes(lap.number));
		const fit = fitStint(
			clean.map((lap) => lap.number),
			clean.map((lap) => lap.timeS)
		);
		const { ols, theil_sen, n } = stint.regression_on_clean_laps;
		// the truth is printed with ten decimals
		const bar = 1e-9;
		const off = (value: number | undefined, right: number) => Math.abs((value ?? NaN) - right);
		expect(fit?.n).toBe(n);
		expect(off(fit?.slope, ols.slope)).toBeLessThan(bar);
		expect(off(fit?.intercept, ols.intercept)).toBeLessThan(bar);
		expect(off(fit?.slopeSe, ols.slope_se)).toBeLessThan(bar);
		expect(off(fit?.slopeCi95[0], ols.slope_ci95[0])).toBeLessThan(bar);
		expect(off(fit?.slopeCi95[1], ols.slope_ci95[1])).toBeLessThan(bar);
		expect(off(fit?.residualSd, ols.residual_sd)).toBeLessThan(bar);
		expect(off(fit?.theilSen, theil_sen.slope)).toBeLessThan(bar);
	});
});

describe('judgeStint on stints with a known fall-off', () => {
	it.each(truth)('chooses the laps of $file, and its slope is that of the clean ones', (stint) => {
		const { fuel } = stint;
		const effect = fuel && { kgPerLap: fuel.kg_per_lap, sPerKg: fuel.s_per_kg };
		const found = stintDocumentSchema.parse(judgeStint(lapsOf(stint.file), effect));
		expect(found.laps.length).toBe(stint.laps);
		const chosen = found.laps.filter((lap) => lap.representative).map((lap) => lap.number);
		const right = chosen.filter((lap) => stint.clean_laps.includes(lap)).length;
		expect((2 * right) / (chosen.length + stint.clean_laps.length)).toBeGreaterThanOrEqual(0.97);
		const { slope, slope_se } = stint.regression_on_clean_laps.ols;
		expect(Math.abs((found.fit?.slopeSPerLap ?? NaN) - slope)).toBeLessThanOrEqual(Math.max(2 * slope_se, 0.002));
		if (fuel) {
			const corrected = (found.fit?.slopeSPerLap ?? NaN) + fuel.kg_per_lap * fuel.s_per_kg;
			expect(found.fuelCorrected?.slopeSPerLap).toBeCloseTo(corrected, 12);
		} else {
			expect(found.fuelCorrected).toBeNull();
			expect(found.warnings).toContain('fuel_unknown');
		}
	});

	it('gives no line through two laps, and says how little three tell', () => {
		const two = judgeStint(readLapList(bytes('lap,lap time (s)\n1,70.1\n2,70.2'))?.laps ?? [], undefined);
		expect(two).toMatchObject({ fit: null, fuelCorrected: null });
		expect(two.warnings).toContain('too_few_laps');
		expect(judgeStint(lapsOf('short.csv'), undefined).warnings).toContain('few_laps');
	});

	it('names out lap, in lap and slow phase', () => {
		const reasons = new Map(
			judgeStint(lapsOf('slow_phase.csv'), undefined).laps.map((lap) => [lap.number, lap.reason])
		);
		expect(reasons.get(1)).toBe('out_lap');
		expect(reasons.get(26)).toBe('in_lap');
		expect([11, 12, 13, 14].map((lap) => reasons.get(lap))).toEqual(new Array(4).fill('neutralised'));
	});
});

const KINDS: { name: string; stint: Omit<MadeUpStint, 'seed'>; f1?: number }[] = [
	{ name: 'with noise', stint: {} },
	{ name: 'with a slope of zero', stint: { slope: 0 } },
	{ name: 'getting quicker', stint: { slope: -0.03 } },
	{ name: 'with a fifth of the laps in traffic', stint: { traffic: 0.2 } },
	{ name: 'with four laps of ten in traffic', stint: { traffic: 0.4, laps: 32 } },
	{ name: 'with a slow phase', stint: { phase: [9, 12] } },
	// so few laps leave the spread itself unsure
	{ name: 'of ten laps', stint: { laps: 12, traffic: 0.15 }, f1: 0.95 },
	{ name: 'of sixty laps', stint: { laps: 60, slope: 0.02, traffic: 0.2 } },
	{ name: 'of a rough driver', stint: { noiseS: 0.4 } },
	{ name: 'of a long lap', stint: { baseS: 480, noiseS: 0.6, slope: 0.3, laps: 14 } }
];

describe('judgeStint on made-up stints', () => {
	const scored = (kind: Omit<MadeUpStint, 'seed'>, seeds = 40) => {
		let [right, wrong, missed, beyond, held] = [0, 0, 0, 0, 0];
		for (let seed = 1; seed <= seeds; seed++) {
			const { laps, clean } = madeUpStint({ ...kind, seed });
			const found = judgeStint(laps, undefined);
			for (const lap of found.laps) {
				const is = clean.includes(lap.number);
				if (lap.representative && is) right++;
				else if (lap.representative) wrong++;
				else if (is) missed++;
			}
			const ofClean = fitStint(
				clean,
				clean.map((number) => laps[number - 1].timeS)
			);
			if (!found.fit || !ofClean) continue;
			if (Math.abs(found.fit.slopeSPerLap - ofClean.slope) > Math.max(2 * ofClean.slopeSe, 0.002)) beyond++;
			const [low, high] = found.fit.slopeCi95;
			const slope = kind.slope ?? 0.045;
			if (low <= slope && high >= slope) held++;
		}
		return { f1: (2 * right) / (2 * right + wrong + missed), wrong, missed, beyond, held: held / seeds };
	};

	it.each(KINDS)('chooses the undisturbed laps of stints $name', ({ name, stint, f1: bar = 0.97 }) => {
		const { f1, wrong, missed, beyond, held } = scored(stint);
		console.log(
			`${name.padEnd(38)} F1 ${f1.toFixed(3)}, wrongly kept ${wrong}, left out ${missed}, slope beyond 2 s.e. ${beyond} of 40, interval holds the truth ${held.toFixed(2)}`
		);
		expect(f1).toBeGreaterThanOrEqual(bar);
		expect(beyond).toBeLessThanOrEqual(3);
		expect(held).toBeGreaterThanOrEqual(0.85);
	});

	it('sees the knee where tyres let go, and keeps those laps', () => {
		let seen = 0;
		for (let seed = 1; seed <= 20; seed++) {
			const { laps } = madeUpStint({ laps: 28, cliff: { fromLap: 19, slope: 0.35 }, seed });
			const found = judgeStint(laps, undefined);
			if (found.knee && Math.abs(found.knee.lap - 19) <= 2 && found.warnings.includes('knee')) seen++;
		}
		expect(seen).toBeGreaterThanOrEqual(18);
	});

	it('claims a knee in a straight stint in one of twenty at most', () => {
		let claimed = 0;
		for (let seed = 1; seed <= 60; seed++) if (judgeStint(madeUpStint({ seed }).laps, undefined).knee) claimed++;
		expect(claimed).toBeLessThanOrEqual(3);
	});

	it('warns of a bent stint', () => {
		const { laps } = madeUpStint({ laps: 30, slope: 0, bend: 0.004, seed: 3 });
		expect(judgeStint(laps, undefined).warnings).toContain('knee');
	});

	it('gives the same slope whatever the unit of the clock and the count of the laps', () => {
		fc.assert(
			fc.property(fc.integer({ min: 1, max: 1000 }), fc.integer({ min: 0, max: 500 }), (seed, shift) => {
				const { laps } = madeUpStint({ seed, traffic: 0.2 });
				const later = laps.map((lap) => ({ ...lap, number: lap.number + shift }));
				const [a, b] = [judgeStint(laps, undefined), judgeStint(later, undefined)];
				expect(b.laps.map((lap) => lap.reason)).toEqual(a.laps.map((lap) => lap.reason));
				expect(b.fit?.slopeSPerLap).toBeCloseTo(a.fit?.slopeSPerLap ?? NaN, 9);
			}),
			{ seed: 4, numRuns: 60 }
		);
	});
});

describe('readLapList', () => {
	it.each([
		{
			name: 'minutes and remarks',
			text: 'Lap;Lap Time;Remarks\n1;1:25.068;out lap\n2;1:10.708;\n3;1:11.200;traffic\n4;1:10.900;'
		},
		{
			name: 'German words and decimal commas',
			text: 'Runde;Rundenzeit;Bemerkung\n1;85,068;Outlap\n2;70,708;\n3;71,2;Verkehr\n4;70,9;'
		},
		{
			name: 'flags before the time',
			text: 'no,flag,time (s),driver\n1,OUT,85.068,A\n2,,70.708,A\n3,TRAFFIC,71.2,A\n4,GREEN,70.9,A'
		},
		{
			name: 'milliseconds',
			text: 'lap,laptime (ms),status\n1,85068,out\n2,70708,valid\n3,71200,invalid\n4,70900,valid'
		},
		{
			name: 'a preamble and quotes',
			text: 'Stint 3\n\n"Lap","Lap time","Notes"\n"1","1:25.068","pit out"\n"2","1:10.708",""\n"3","1:11.200","yellow"\n"4","1:10.900",""'
		}
	])('reads $name', ({ text }) => {
		const laps = readLapList(bytes(text))?.laps ?? [];
		expect(laps.map((lap) => lap.number)).toEqual([1, 2, 3, 4]);
		[85.068, 70.708, 71.2, 70.9].forEach((timeS, i) => expect(laps[i].timeS).toBeCloseTo(timeS, 9));
		expect(laps.map((lap) => lap.marked === null)).toEqual([false, true, false, true]);
		expect(laps[0].marked).toBe('out_lap');
	});

	it('numbers laps where the file does not, and skips totals', () => {
		const list = readLapList(bytes('lap time\n70.1\n70.2\n70.3'));
		expect(list?.laps.map((lap) => lap.number)).toEqual([1, 2, 3]);
		expect(list?.warnings).toContain('lap_numbers_missing');
		const totals = readLapList(bytes('lap,time\n1,70.1\n2,70.2\ntotal,140.3'));
		expect(totals?.laps.length).toBe(2);
		expect(totals?.warnings).toContain('bad_rows');
	});

	it('takes a recording for none', () => {
		expect(() => readLapList(bytes('time,lap,speed\n0,1,100\n0.1,1,101'))).toThrow();
		expect(readLapList(bytes('lap,time\n1,0.00\n1,0.02\n1,0.04'))).toBeNull();
	});

	it('keeps the longest of several stints', () => {
		const times = (from: number, count: number) =>
			Array.from(
				{ length: count },
				(_, i) => `${from + i},${70 + 0.05 * i},${i === 0 ? 'out' : i === count - 1 ? 'in' : ''}`
			);
		const list = readLapList(bytes(['lap,lap time,notes', ...times(1, 5), ...times(6, 9)].join('\n')));
		expect(list?.warnings).toContain('more_stints');
		expect(list?.laps.filter((lap) => lap.marked === 'other_stint').map((lap) => lap.number)).toEqual([2, 3, 4]);
	});
});

describe('paceDifference', () => {
	const stint = (level: number, noiseS: number, normal: () => number, rho = 0) => {
		const x = Array.from({ length: 15 }, (_, i) => i + 2);
		let before = normal();
		const y = x.map((lap) => {
			before = rho * before + Math.sqrt(1 - rho * rho) * normal();
			return level + 0.05 * lap + noiseS * before;
		});
		const fit = fitStint(x, y);
		if (!fit) throw new RangeError('a stint of 15 laps has a line');
		return fit;
	};

	it('holds the true difference in 93 to 98 of 100 pairs of stints', () => {
		const normal = seededNormal(11);
		let [held, called] = [0, 0];
		for (let i = 0; i < 1000; i++) {
			const { ci95, quicker } = paceDifference(stint(70, 0.15, normal), stint(70, 0.1, normal), 9);
			if (ci95[0] <= 0 && ci95[1] >= 0) held++;
			if (quicker !== null) called++;
		}
		console.log(`pace difference in its 95 % interval: ${held} of 1000`);
		expect(held).toBeGreaterThanOrEqual(930);
		expect(held).toBeLessThanOrEqual(985);
		expect(called).toBe(1000 - held);
	});

	it('is wider where laps in a row are alike, and swaps its sign with the stints', () => {
		const normal = seededNormal(5);
		const [a, b] = [stint(70, 0.1, normal), stint(70.4, 0.1, normal)];
		const alike = paceDifference({ ...a, autocorrelation: 0.6 }, b, 9);
		const plain = paceDifference(a, b, 9);
		expect(alike.ci95[1] - alike.ci95[0]).toBeGreaterThan(plain.ci95[1] - plain.ci95[0]);
		expect(plain.quicker).toBe('first');
		const swapped = paceDifference(b, a, 9);
		expect(swapped.differenceS).toBeCloseTo(-plain.differenceS, 12);
		expect(swapped.quicker).toBe('second');
	});
});

describe('stint plans', () => {
	it('count whole laps of fuel left', () => {
		expect(lapsOfFuelLeft(2.1 * 3, 2.1)).toBe(3);
		expect(lapsOfFuelLeft(6.2, 2.1)).toBe(2);
		expect(() => lapsOfFuelLeft(6, 0)).toThrow(RangeError);
	});

	it('say when the difference is a lap: 1 s a lap on 60 s laps is a lap after 60 of them', () => {
		expect(minutesUntilALap({ slope: 0, intercept: 61 }, { slope: 0, intercept: 60 })).toBeCloseTo(61, 6);
		expect(minutesUntilALap({ slope: 0, intercept: 60 }, { slope: 0, intercept: 60 })).toBeNull();
	});
});
