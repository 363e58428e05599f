import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { gunzipSync } from 'node:zlib';
import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { pedalDocumentSchema } from '../../schemas/pedalDocument.ts';
import { checkPedal } from './checkPedal.ts';
import { powerDeparture } from './pedalCurve.ts';
import { sweepOf, sweepText, type MadeUpPedal } from './testing/sweepText.ts';

const fixture = (name: string) =>
	gunzipSync(readFileSync(fileURLToPath(new URL(`../../../../fixtures/pedal/${name}.gz`, import.meta.url))));
const truth = z
	.object({
		cases: z.array(
			z.object({
				file: z.string(),
				gamma: z.number(),
				dead_zone_pct: z.number(),
				saturation_pct: z.number(),
				noise_sd: z.number(),
				hysteresis_pct: z.number(),
				max_deviation_from_straight_in_active_range_pct: z.number(),
				at_normalised_input: z.number().nullable()
			})
		)
	})
	.parse(JSON.parse(fixture('truth.json').toString())).cases;
const bytes = (text: string) => new TextEncoder().encode(text);
const verdictOf = (gamma: number) => (gamma === 1 ? 'linear' : gamma > 1 ? 'progressive' : 'degressive');

describe('checkPedal on sweeps with a known curve', () => {
	it.each(truth)('finds the curve of $file', (pedal) => {
		const found = pedalDocumentSchema.parse(checkPedal(fixture(pedal.file)));
		const rough =
			pedal.noise_sd > 0 || pedal.hysteresis_pct > 0 || pedal.dead_zone_pct > 0 || pedal.saturation_pct < 100;
		const off = (value: number | null, right: number) => Math.abs((value ?? NaN) - right);
		expect(off(found.gamma, pedal.gamma)).toBeLessThanOrEqual(rough ? 0.05 : 0.02);
		expect(off(found.largestDeparturePct, pedal.max_deviation_from_straight_in_active_range_pct)).toBeLessThanOrEqual(
			rough ? 2 : 1
		);
		expect(off(found.deadZonePct, pedal.dead_zone_pct)).toBeLessThanOrEqual(1.5);
		expect(off(found.saturationPct, pedal.saturation_pct)).toBeLessThanOrEqual(1.5);
		expect(off(found.hysteresisPct, pedal.hysteresis_pct)).toBeLessThanOrEqual(1);
		expect(found.verdict).toBe(verdictOf(pedal.gamma));
		if (pedal.at_normalised_input !== null) expect(found.departureAtInput).toBeCloseTo(pedal.at_normalised_input, 1);
	});
});

const KINDS: { name: string; pedal: Omit<MadeUpPedal, 'gamma'>; gammaBar: number; departureBar: number }[] = [
	{ name: 'clean', pedal: {}, gammaBar: 0.02, departureBar: 1 },
	{ name: 'in 255 steps', pedal: { steps: 255 }, gammaBar: 0.05, departureBar: 2 },
	{ name: 'with 0.2 % of noise', pedal: { noisePct: 0.2 }, gammaBar: 0.05, departureBar: 2 },
	{ name: 'with 1 % of noise', pedal: { noisePct: 1 }, gammaBar: 0.05, departureBar: 2 },
	{ name: 'with dead zone and saturation', pedal: { deadPct: 5, saturationPct: 90 }, gammaBar: 0.05, departureBar: 2 },
	{
		name: 'with everything',
		pedal: { deadPct: 3, saturationPct: 95, noisePct: 0.5, steps: 255, hysteresisPct: 2 },
		gammaBar: 0.05,
		departureBar: 2
	},
	{ name: 'with hysteresis', pedal: { hysteresisPct: 4 }, gammaBar: 0.05, departureBar: 2 },
	{ name: 'with hysteresis and noise', pedal: { hysteresisPct: 3, noisePct: 0.5 }, gammaBar: 0.05, departureBar: 2 },
	{ name: 'pressed once and released', pedal: { sweeps: 1 }, gammaBar: 0.02, departureBar: 1 },
	{ name: 'with few rows', pedal: { rows: 25, sweeps: 1 }, gammaBar: 0.02, departureBar: 1 }
];

describe('checkPedal on made-up pedals', { timeout: 60_000 }, () => {
	const gammas = [0.5, 0.7, 1, 1.3, 1.8, 2.5];
	it.each(KINDS)('finds exponent, dead zone, saturation and hysteresis of pedals $name', (kind) => {
		const worst = { gamma: 0, departure: 0, dead: 0, saturation: 0, hysteresis: 0 };
		gammas.forEach((gamma, i) => {
			const { deadPct = 0, saturationPct = 100, hysteresisPct = 0 } = kind.pedal;
			const found = checkPedal(sweepText({ ...kind.pedal, gamma, seed: 7 + i }));
			const grow = (name: keyof typeof worst, value: number | null, right: number) => {
				worst[name] = Math.max(worst[name], value === null ? Infinity : Math.abs(value - right));
			};
			grow('gamma', found.gamma, gamma);
			grow('departure', found.largestDeparturePct, 100 * (powerDeparture(gamma)?.size ?? 0));
			grow('dead', found.deadZonePct, deadPct);
			grow('saturation', found.saturationPct, saturationPct);
			grow('hysteresis', found.hysteresisPct, hysteresisPct);
			expect.soft(found.verdict, `${gamma}`).toBe(verdictOf(gamma));
			if (gamma > 1) expect.soft(found.gammaCi95?.[0]).toBeGreaterThan(1);
		});
		console.log(
			kind.name.padEnd(32),
			Object.entries(worst)
				.map(([name, value]) => `${name} ${value.toFixed(4)}`)
				.join('  ')
		);
		expect(worst.gamma).toBeLessThanOrEqual(kind.gammaBar);
		expect(worst.departure).toBeLessThanOrEqual(kind.departureBar);
		expect(worst.dead).toBeLessThanOrEqual(1.5);
		expect(worst.saturation).toBeLessThanOrEqual(1.5);
		expect(worst.hysteresis).toBeLessThanOrEqual(1);
	});

	it.each([45, 60, 80])(
		'of a sweep that ends at %d % of the force says γ rightly, or that it cannot tell',
		(reachPct) => {
			for (const noisePct of [0, 0.5]) {
				for (const gamma of gammas) {
					const found = checkPedal(sweepText({ gamma, reachPct, noisePct }));
					expect(found.saturationPct).toBeNull();
					expect(found.reasons.saturationPct).toBe('partial_sweep');
					if (found.gamma === null) expect(found.reasons.gamma).toBe('partial_sweep');
					else expect(Math.abs(found.gamma - gamma)).toBeLessThanOrEqual(0.05);
				}
			}
		}
	);

	it('passes γ = 1.0 and fails γ = 1.5 (common practice: a brake pedal is linear, no distortion anywhere in the travel)', () => {
		expect(checkPedal(sweepText({ gamma: 1, noisePct: 0.3 })).verdict).toBe('linear');
		const bent = checkPedal(sweepText({ gamma: 1.5, noisePct: 0.3 }));
		expect(bent.verdict).toBe('progressive');
		expect(bent.halves.map((half) => half.verdict)).toEqual(['progressive', 'progressive']);
	});

	it('covers γ with its 95 % interval in 9 of 10 seeded sweeps or more', () => {
		let covered = 0;
		for (let seed = 0; seed < 40; seed++) {
			const ci = checkPedal(sweepText({ gamma: 1.4, noisePct: 0.5, rows: 50, sweeps: 1, seed })).gammaCi95;
			if (ci && ci[0] <= 1.4 && ci[1] >= 1.4) covered++;
		}
		console.log(`γ in its 95 % interval: ${covered} of 40`);
		expect(covered).toBeGreaterThanOrEqual(36);
	});

	it('tells the halves of a pedal apart that is straight first and steep then', () => {
		const rows = sweepOf({ gamma: 1 }).map(({ forcePct }) => {
			const x = forcePct / 100;
			return `${forcePct.toFixed(3)},${(100 * (x < 0.5 ? 0.6 * x : 0.3 + 1.4 * (x - 0.5))).toFixed(3)}`;
		});
		const found = checkPedal(bytes(['force (%),output (%)', ...rows].join('\n')));
		expect(found.gamma).toBeNull();
		expect(found.reasons.gamma).toBe('not_a_power_curve');
		expect(found.largestDeparturePct).toBeCloseTo(-20, 0);
		expect(found.departureAtInput).toBeCloseTo(0.5, 1);
		expect(found.verdict).toBe('progressive');
	});
});

describe('checkPedal reads', { timeout: 60_000 }, () => {
	const rows = sweepOf({ gamma: 1.5, rows: 120 });
	const text = (head: string, row: (r: (typeof rows)[number]) => string) => bytes([head, ...rows.map(row)].join('\n'));

	it.each([
		{
			name: 'newtons and 12-bit counts',
			file: text(
				'Zeit;Kraft [N];Ausgang [counts]',
				(r) => `${r.timeS};${6 * r.forcePct};${Math.round(40.95 * r.outputPct)}`
			)
		},
		{
			name: 'decimal commas',
			file: text('Kraft (N);Ausgang (%)', (r) =>
				`${(6 * r.forcePct).toFixed(2)};${r.outputPct.toFixed(3)}`.replaceAll('.', ',')
			)
		},
		{
			name: 'the output first, as fractions',
			file: text(
				'pedal output,applied force (kg)',
				(r) => `${(r.outputPct / 100).toFixed(5)},${(0.9 * r.forcePct).toFixed(3)}`
			)
		},
		{
			name: '8-bit counts without a unit',
			file: text('t,load,axis', (r) => `${r.timeS},${(r.forcePct / 100).toFixed(4)},${Math.round(2.55 * r.outputPct)}`)
		},
		{
			name: 'a preamble, tabs and a rest level',
			file: text(
				'rig 4\n\nForce (N)\tOutput (counts)',
				(r) => `${6 * r.forcePct}\t${Math.round(300 + 30 * r.outputPct)}`
			)
		},
		{
			name: 'brake words on both columns',
			file: text('time_s,brake_pct,brake_force_n', (r) => `${r.timeS},${r.outputPct.toFixed(3)},${6 * r.forcePct}`)
		}
	])('$name', ({ file }) => {
		const found = checkPedal(file);
		expect(found.gamma).toBeCloseTo(1.5, 1);
		expect(Math.abs((found.gamma ?? NaN) - 1.5)).toBeLessThan(0.05);
		expect(found.verdict).toBe('progressive');
		expect(found.sweeps).toBe(2);
	});

	it('weights on the pedal: a table of eleven rows', () => {
		const table = Array.from({ length: 11 }, (_, i) => `${5 * i},${(100 * (i / 10) ** 1.5).toFixed(2)}`);
		const found = checkPedal(bytes(['weight (kg),output (%)', ...table].join('\n')));
		expect(found.gamma).toBeCloseTo(1.5, 2);
		expect(found.hysteresisPct).toBeNull();
		expect(found.reasons.hysteresisPct).toBe('one_direction');
	});

	it('no force: dead zone, saturation, noise and drift, and no verdict', () => {
		const live = rows.map((r, i) => {
			const output = Math.max(0, r.forcePct - 10) > 0 ? 5 + 0.9 * (r.forcePct - 10) : i > 240 ? 1 : 0;
			return `${r.timeS},${output.toFixed(3)}`;
		});
		const found = pedalDocumentSchema.parse(checkPedal(bytes(['time (s),brake (%)', ...live].join('\n'))));
		expect(found).toMatchObject({ gamma: null, verdict: 'unknown', sweeps: 2, input: null });
		expect(found.reasons.gamma).toBe('no_known_input');
		expect(found.saturationPct).toBeCloseTo(86, 3);
		expect(found.deadZonePct).toBeCloseTo(5, 0);
		expect(found.driftPct).toBeCloseTo(1, 3);
	});

	it('a pedal that gives nothing: says so', () => {
		const found = checkPedal(text('force (N),output (%)', (r) => `${r.forcePct},0`));
		expect(found).toMatchObject({ gamma: null, verdict: 'unknown' });
		expect(found.reasons.gamma).toBe('no_output');
	});

	it.each([
		{ name: 'nothing', file: '', code: 'empty_file' },
		{ name: 'prose', file: 'dear sir or madam\nthe pedal feels odd', code: 'no_header' },
		{ name: 'a header alone', file: 'force (N),output (%)\n', code: 'no_data_rows' },
		{ name: 'two rows', file: 'force (N),output (%)\n1,2\n2,3\n', code: 'too_few_samples' }
	])('refuses $name', ({ file, code }) => {
		expect(() => checkPedal(bytes(file))).toThrowError(expect.objectContaining({ code }));
	});

	it('the same from the same sweep in another unit of force', () => {
		fc.assert(
			fc.property(
				fc.double({ min: 0.6, max: 2.2, noNaN: true }),
				fc.double({ min: 0.1, max: 50, noNaN: true }),
				(gamma, factor) => {
					const sweep = sweepOf({ gamma, rows: 60, sweeps: 1 });
					const inUnit = (head: string, scale: number) =>
						checkPedal(bytes([head, ...sweep.map((r) => `${scale * r.forcePct},${r.outputPct}`)].join('\n')));
					const [percent, newton] = [inUnit('force (%),output (%)', 1), inUnit('force (N),output (%)', factor)];
					expect(newton.gamma).toBeCloseTo(percent.gamma ?? NaN, 6);
					expect(newton.largestDeparturePct).toBeCloseTo(percent.largestDeparturePct ?? NaN, 4);
				}
			),
			{ seed: 4, numRuns: 8 }
		);
	});
});
