import type { PedalDocument, PedalWarning } from '../../schemas/pedalDocument.ts';
import { quantile } from '../stats/quantile.ts';
import { robustSpread } from '../stats/robustSpread.ts';
import type { SweepColumn } from './readSweep.ts';
import { drift, restShare } from './restLevel.ts';
import { findStrokes } from './strokes.ts';

/**
 * What a sweep without a known input shows: how much of the output is skipped at the start, how much of it is reached, noise and drift.
 * How the output follows the foot cannot be known.
 */
export function judgeLiveSweep(output: SweepColumn, warnings: readonly PedalWarning[]): PedalDocument {
	const { values, full } = output;
	const most = quantile(values, 1);
	const scale = full ?? most;
	const share = values.map((value) => value / (scale || 1));
	const rest = restShare(share);
	const noise = noiseOf(share);
	const strokes = findStrokes(share);
	const above = share.filter((value) => value > rest + Math.max(1e-9, 4 * noise));
	const moved = above.length > 0 && most > 0;
	const none = { gamma: null, gammaCi95: null, largestDeparturePct: null, departureAtInput: null, hysteresisPct: null };
	const reasons: PedalDocument['reasons'] = {};
	for (const field of [...Object.keys(none), 'verdict']) reasons[field] = 'no_known_input';
	if (!moved) reasons.deadZonePct = 'no_output';
	if (full === null) reasons.saturationPct = 'full_scale_unknown';
	return {
		schema: 'kerbnote.pedal/1',
		...none,
		deadZonePct: moved ? 100 * skippedAtStart(share, rest, noise) : null,
		saturationPct: full === null ? null : 100 * quantile(share, 1),
		verdict: 'unknown',
		reasons,
		halves: [],
		noisePct: 100 * noise,
		driftPct: 100 * drift(share, rest, noise),
		sweeps: strokes.presses,
		samples: values.length,
		input: null,
		output: { header: output.header, unit: output.unit, full },
		warnings: full === null ? [...warnings, 'output_scale_assumed'] : [...warnings]
	};
}

/** Noise of neighbours while nothing moves: second differences hold no slope. */
function noiseOf(share: Float64Array): number {
	if (share.length < 5) return 0;
	const bends = Float64Array.from({ length: share.length - 2 }, (_, i) => share[i] - 2 * share[i + 1] + share[i + 2]);
	return robustSpread(bends) / Math.sqrt(6);
}

/** The jump from rest to the least output that is ever shown, less an ordinary step between samples. */
function skippedAtStart(share: Float64Array, rest: number, noise: number): number {
	// the level at rest may drift by as much
	const limit = rest + Math.max(0.02, 4 * noise);
	const jumps: number[] = [];
	const steps: number[] = [];
	for (let i = 1; i < share.length; i++) {
		if (share[i - 1] <= limit && share[i] > limit) jumps.push(share[i] - rest);
		else if (share[i] > limit && share[i] > share[i - 1]) steps.push(share[i] - share[i - 1]);
	}
	const jump = jumps.length > 0 ? quantile(jumps, 0.5) : 0;
	return Math.max(0, jump - (steps.length > 0 ? quantile(steps, 0.5) : 0));
}
