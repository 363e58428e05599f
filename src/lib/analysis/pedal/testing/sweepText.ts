import { seededNormal } from '../../metrics/testing/seededNormal.ts';
import { pedalOutput } from '../pedalCurve.ts';

export interface MadeUpPedal {
	gamma: number;
	deadPct?: number;
	saturationPct?: number;
	hysteresisPct?: number;
	/** % of output, clipped to the output's range as a device does */
	noisePct?: number;
	/** steps of the output's scale; none: three decimals */
	steps?: number;
	/** sweeps end at this % of the force */
	reachPct?: number;
	sweeps?: number;
	seed?: number;
	/** rows between rest and full */
	rows?: number;
}

/** Columns of a sweep, force and output in %, pressed and released at an even speed. */
export function sweepOf(pedal: MadeUpPedal): { timeS: number; forcePct: number; outputPct: number }[] {
	const { gamma, deadPct = 0, saturationPct = 100, hysteresisPct = 0, noisePct = 0, steps } = pedal;
	const { reachPct = 100, sweeps = 2, seed = 1, rows = 150 } = pedal;
	const normal = seededNormal(seed);
	const curve = { gamma, dead: deadPct / 100, saturation: saturationPct / 100, top: 100, hysteresis: 0 };
	return Array.from({ length: 2 * rows * sweeps + 1 }, (_, i) => {
		const phase = (i % (2 * rows)) / rows;
		const forcePct = reachPct * (phase <= 1 ? phase : 2 - phase);
		const shift = phase > 1 ? hysteresisPct : 0;
		const exact = pedalOutput(curve, (forcePct + shift) / 100) + noisePct * normal();
		const held = Math.min(100, Math.max(0, exact));
		const outputPct = steps ? (Math.round((held / 100) * steps) / steps) * 100 : held;
		return { timeS: i / 100, forcePct, outputPct };
	});
}

/** The same as a file. */
export function sweepText(pedal: MadeUpPedal): Uint8Array {
	const lines = sweepOf(pedal).map(
		({ timeS, forcePct, outputPct }) => `${timeS.toFixed(3)},${forcePct.toFixed(4)},${outputPct.toFixed(4)}`
	);
	return new TextEncoder().encode(['time (s),raw force (% of load),output (%)', ...lines].join('\n'));
}
