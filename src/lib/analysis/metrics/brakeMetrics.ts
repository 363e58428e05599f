import { KMH_PER_MPS } from '../../units.ts';
import { placeAtTime } from '../trace/placeTime.ts';
import type { Span } from './coasting.ts';
import type { CornerPassage } from './cornerPassages.ts';
import type { Braking } from './measureBraking.ts';
import type { MeasuredRun } from './measuredRun.ts';
import type { MetricsSheet } from './metricsSheet.ts';
import { speedAt } from './steadySpeed.ts';

const BRAKE_FIELDS = [
	'onsetM',
	'onsetS',
	'peakPct',
	'peakRawPct',
	'peakM',
	'riseS',
	'releaseStartM',
	'releaseEndM',
	'releaseS',
	'releaseProgressive',
	'dabs',
	'lightHoldS',
	'holdPct',
	'brakedMps2',
	'trailS',
	'trailM'
] as const;
/** What an on/off brake, or the car's slowing, cannot say. */
const SHAPE_FIELDS = [
	'peakPct',
	'peakRawPct',
	'peakM',
	'riseS',
	'releaseStartM',
	'releaseS',
	'releaseProgressive',
	'dabs',
	'lightHoldS',
	'holdPct',
	'brakedMps2'
] as const;
const LIGHT_HOLD_LEAST_S = 0.2;
/** Over less time a drop of speed says nothing of the strength of a braking. */
const STRENGTH_LEAST_S = 0.25;
/** Slope and bumps leave a deceleration this uncertain. */
const STRENGTH_PLUS_MINUS_MPS2 = 0.15;

/** Onset and off of a corner's braking, from the brake or, without one, from the car's slowing; NaN where a hole swallowed it. */
export interface BrakingSpan extends Span {
	plusMinusS: number;
	endPlusMinusS: number;
}

/** From the onset of a corner's first braking to the off of its last; null for none. */
export function spanOf(brakings: Braking[]): BrakingSpan | null {
	const first = brakings.at(0);
	const last = brakings.at(-1);
	if (!first || !last) return null;
	return {
		startS: first.onset?.timeS ?? NaN,
		endS: last.off?.timeS ?? NaN,
		plusMinusS: first.onset?.plusMinusS ?? NaN,
		endPlusMinusS: last.off?.plusMinusS ?? NaN
	};
}

/**
 * Fills in what the brake did for a corner: onset of the first braking, peak of the strongest, release of the last.
 *
 * @param sheet    to be filled
 * @param brakings of this corner, in order; empty where there is no brake channel, or no braking
 * @param span     from the first onset to the last off, or what the car's slowing shows instead
 * @param turnInS  null where it is not known
 */
export function fillBrake(
	sheet: MetricsSheet,
	run: MeasuredRun,
	passage: CornerPassage,
	brakings: Braking[],
	span: BrakingSpan | null,
	turnInS: number | null
): void {
	if (!span) {
		sheet.explain(BRAKE_FIELDS, run.brake ? 'no_brake_here' : 'no_channel');
		return;
	}
	const onset = { timeS: span.startS, plusMinusS: span.plusMinusS };
	sheet.setPlace('onsetM', onset, 'gap');
	sheet.set('onsetS', span.startS, 'gap', span.plusMinusS);
	sheet.setPlace('releaseEndM', { timeS: span.endS, plusMinusS: span.endPlusMinusS }, 'not_released');
	fillTrail(sheet, run, brakings, span, turnInS);
	const last = brakings.at(-1);
	if (!last) {
		sheet.explain(SHAPE_FIELDS, 'no_channel');
		sheet.explain(['onsetM', 'onsetS', 'releaseEndM', 'trailS', 'trailM'], 'from_deceleration');
	} else if (run.placed.channels.brakeUnit === 'switch') {
		sheet.explain(SHAPE_FIELDS, 'brake_switch');
	} else {
		fillShape(sheet, run, { ...passage, startS: Math.min(passage.startS, turnInS ?? Infinity) }, brakings, last, span);
	}
}

function fillShape(
	sheet: MetricsSheet,
	run: MeasuredRun,
	passage: CornerPassage,
	brakings: Braking[],
	last: Braking,
	span: BrakingSpan
): void {
	const noise = run.brake?.noise ?? 0;
	const strongest = brakings.reduce((most, one) => (one.peakPct > most.peakPct ? one : most));
	sheet.set('peakPct', strongest.peakPct, 'gap', noise);
	sheet.set('peakRawPct', Math.max(...brakings.map((one) => one.peakRawPct)), 'gap', 3 * noise);
	sheet.setPlace('peakM', { timeS: strongest.peakS }, 'gap');
	sheet.set('riseS', strongest.riseS, 'gap', span.plusMinusS);
	sheet.setPlace('releaseStartM', { timeS: last.releaseStartS }, 'gap');
	sheet.set('releaseS', span.endS - last.releaseStartS, 'not_released', span.endPlusMinusS);
	const dabs = brakings.reduce((sum, one) => sum + one.dabs, brakings.length - 1 + passage.touches);
	sheet.set('dabs', dabs, 'gap');
	sheet.metrics.releaseProgressive = last.releaseProgressive;
	if (last.releaseProgressive === null) sheet.explain(['releaseProgressive'], 'too_coarse');
	sheet.set('lightHoldS', lightHold(passage, brakings), 'gap', Math.max(run.speed.sampleS / 2, noise / 10));
	const hold = longestHold(passage, brakings);
	sheet.set('holdPct', hold, 'no_hold', noise);
	fillStrength(sheet, run, strongest);
	if (run.placed.channels.brakeScaleAssumed) sheet.explain(['peakPct', 'peakRawPct'], 'brake_scale_assumed');
}

/** Level of the longest level stretch while the car turns, light or not; null for none. */
function longestHold({ startS, endS }: CornerPassage, brakings: Braking[]): number | null {
	let longest = LIGHT_HOLD_LEAST_S - 1e-9;
	let level: number | null = null;
	for (const hold of brakings.flatMap((one) => one.holds)) {
		const turningS = Math.min(hold.endS, endS) - Math.max(hold.startS, startS);
		if (turningS < longest) continue;
		longest = turningS;
		level = hold.level;
	}
	return level;
}

/** Mean deceleration while the strongest braking is at full strength: what a harder one would have to raise. */
function fillStrength(sheet: MetricsSheet, { speed }: MeasuredRun, { heldS: [fromS, toS] }: Braking): void {
	const heldS = toS - fromS;
	if (!(heldS >= STRENGTH_LEAST_S)) return sheet.explain(['brakedMps2'], 'too_coarse');
	const dropMps = (speedAt(speed, fromS) - speedAt(speed, toS)) / KMH_PER_MPS;
	const plusMinus = (speed.noiseKmh * Math.SQRT2) / KMH_PER_MPS / heldS;
	sheet.set('brakedMps2', dropMps / heldS, 'gap', Math.max(plusMinus, STRENGTH_PLUS_MINUS_MPS2));
}

/** The longest light hold while the car turns, s; 0 for none. */
function lightHold({ startS, endS }: CornerPassage, brakings: Braking[]): number {
	let longest = 0;
	for (const hold of brakings.flatMap((one) => one.lightHolds)) {
		const turningS = Math.min(hold.endS, endS) - Math.max(hold.startS, startS);
		if (turningS > longest) longest = turningS;
	}
	return longest >= LIGHT_HOLD_LEAST_S - 1e-9 ? longest : 0;
}

function fillTrail(
	sheet: MetricsSheet,
	run: MeasuredRun,
	brakings: Braking[],
	span: BrakingSpan,
	turnInS: number | null
): void {
	if (turnInS === null) {
		sheet.explain(['trailS', 'trailM'], 'no_channel');
		return;
	}
	const spans =
		brakings.length > 0
			? brakings.map((one) => ({ startS: one.onset?.timeS ?? -Infinity, endS: one.off?.timeS ?? NaN }))
			: [span];
	let trailS = 0;
	let trailM = 0;
	for (const { startS, endS } of spans) {
		const fromS = Math.max(startS, turnInS);
		if (endS <= fromS) continue;
		trailS += endS - fromS;
		trailM += placeAtTime(run.placed, endS) - placeAtTime(run.placed, fromS);
	}
	sheet.set('trailS', trailS, 'not_released', span.endPlusMinusS);
	sheet.set('trailM', trailM, 'not_released');
}
