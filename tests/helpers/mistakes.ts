import fc from 'fast-check';
import { expect } from 'vitest';
import { compareLaps } from '../../src/lib/analysis/compare/compareLaps.ts';
import { countsOnce } from '../../src/lib/analysis/findings/countsOnce.ts';
import type { FindingCode } from '../../src/lib/schemas/codes.ts';
import { layCircuit, plannedLap, type Circuit, type CornerPlan } from './plannedLap.ts';

/** One mistake in one corner of any circuit: causes and costs must hold on circuits that nobody has seen. */

const MODEL = {
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
			straightM: fc.integer({ min: 90, max: 500 }),
			minMps: fc.integer({ min: 11, max: 34 }),
			plateauM: fc.integer({ min: 20, max: 50 })
		}),
		{ minLength: 3, maxLength: 9 }
	)
	.map((sketches) => layCircuit(sketches));

const changed = (circuit: Circuit, k: number, change: (plan: CornerPlan) => Partial<CornerPlan>): Circuit => ({
	...circuit,
	plans: circuit.plans.map((plan, i) => (i === k ? { ...plan, ...change(plan) } : plan))
});

/** Speed at which the reference brakes for a corner. */
function arrivalMps(circuit: Circuit, k: number): number {
	const { grid } = plannedLap(circuit, 1);
	return grid.speedKmh[circuit.plans[k].onsetM + grid.marginM] / 3.6;
}

export interface Mistake {
	name: string;
	code: FindingCode;
	change: (circuit: Circuit, k: number) => Circuit;
}

export const MISTAKES: Mistake[] = [
	{
		name: 'braking 12 m early',
		code: 'brake_early',
		change: (circuit, k) => changed(circuit, k, ({ onsetM }) => ({ onsetM: onsetM - 12 }))
	},
	{
		name: 'a peak of 72 instead of 95, begun as much earlier as it needs',
		code: 'peak_under',
		change: (circuit, k) =>
			changed(circuit, k, ({ onsetM, minMps, brakingMps2, peakPct }) => {
				const arrival = arrivalMps(circuit, k);
				const weaker = (brakingMps2 * 72) / 95;
				const slowestM = onsetM + (arrival ** 2 - minMps ** 2) / (2 * brakingMps2);
				// v(x)² = arrival² − 2·3.6·(onset − x) before the onset, and 2·weaker·(slowest − x) + min² from x on
				const needed = arrival ** 2 - 7.2 * onsetM - minMps ** 2 - 2 * weaker * slowestM;
				return {
					onsetM: Math.round(-needed / (7.2 + 2 * weaker)),
					brakingMps2: weaker,
					peakPct: (peakPct * 72) / 95
				};
			})
	},
	{
		name: 'a minimum speed 4 km/h lower',
		code: 'min_speed_low',
		change: (circuit, k) => changed(circuit, k, ({ minMps }) => ({ minMps: minMps - 4 / 3.6 }))
	},
	{
		name: 'a pick-up 15 m late',
		code: 'pick_up_late',
		change: (circuit, k) => changed(circuit, k, ({ pickUpM }) => ({ pickUpM: pickUpM + 15 }))
	},
	{
		name: 'coasting 0.8 s before the brake',
		code: 'coasting',
		change: (circuit, k) => changed(circuit, k, () => ({ coastS: 0.8 }))
	}
];

/**
 * Lets fast-check lay circuits and put the mistake into one of their corners: it must be named first, at its corner, with the time that
 * the lap lost.
 */
export function expectNamedOnAnyCircuit({ code, change }: Mistake, numRuns: number): void {
	fc.assert(
		fc.property(circuits, fc.nat(), (circuit, pick) => {
			const k = pick % circuit.plans.length;
			// there must be room to brake from: a corner that is hardly braked for has no onset to be early
			fc.pre(arrivalMps(circuit, k) > circuit.plans[k].minMps + 8);
			const reference = plannedLap(circuit, 1);
			const driver = plannedLap(change(circuit, k), 2);
			const comparison = compareLaps({
				driver,
				reference,
				corners: circuit.corners,
				run: { metrics: driver.metrics, cleanLaps: [], fullThrottle: MODEL }
			});
			const lostS = comparison.deltaS;
			fc.pre(lostS > 0.02);
			const [first, ...others] = comparison.findings.filter(countsOnce);
			const slackS = Math.max(0.1 * lostS, 0.01);
			expect(first).toMatchObject({ corner: k + 1, code });
			expect(Math.abs((first.costS ?? NaN) - lostS)).toBeLessThan(slackS);
			for (const other of others) expect(other.costS ?? 0).toBeLessThan(slackS);
		}),
		{ seed: 21, numRuns }
	);
}
