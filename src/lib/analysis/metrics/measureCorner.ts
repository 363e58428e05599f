import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import { fillBrake, spanOf, type BrakingSpan } from './brakeMetrics.ts';
import type { CornerPassage } from './cornerPassages.ts';
import { decelerationBraking } from './decelerationBraking.ts';
import { idleGap } from './idleGap.ts';
import type { Braking } from './measureBraking.ts';
import { touchesHole, type MeasuredRun } from './measuredRun.ts';
import { MetricsSheet } from './metricsSheet.ts';
import { minimumSpeed, speedAt } from './steadySpeed.ts';
import { fillThrottle } from './throttleMetrics.ts';
import { steerCorrections } from './steerCorrections.ts';
import { turnIn } from './turnIn.ts';
import { wheelSpin } from './wheelSpin.ts';

/** Wheels may still spin this long behind the corner's end. */
const SPIN_AFTER_S = 1;

/**
 * Every metric of one corner in one lap, from the run's own samples. Places count from the line of the lap and run on across it, so
 * that a corner beyond it lies beyond the lap's length, or below 0. Lock-ups are counted by `measureRun`.
 *
 * @param run    the run, prepared
 * @param index  which passage of `run.passages`; its lap must be known
 * @returns what cannot be known is null, with its reason
 */
export function measureCorner(run: MeasuredRun, index: number): CornerMetrics {
	const passage = run.passages[index];
	const before = index > 0 ? run.passages[index - 1] : undefined;
	const next = run.passages.at(index + 1);
	const sheet = new MetricsSheet(run, passage);
	fillSpeeds(sheet, run, passage);
	const turnInS = turnInOf(run, before, passage);
	sheet.setPlace('turnInM', turnInS === null ? null : { timeS: turnInS }, 'no_channel');
	const brakings = brakingsOf(run, passage);
	const span = spanOf(brakings) ?? (run.brake ? null : spanBySlowing(run, before, passage));
	fillBrake(sheet, run, passage, brakings, span, turnInS);
	const nextOnsetS = (next && brakingsOf(run, next).at(0)?.onset?.timeS) ?? null;
	fillThrottle(sheet, run, { before, passage, next }, brakings, span, nextOnsetS);
	fillIdleGap(sheet, run, passage, next);
	fillHandling(sheet, run, passage, turnInS);
	return sheet.metrics;
}

function brakingsOf(run: MeasuredRun, passage: CornerPassage): Braking[] {
	return passage.brakings.flatMap((application) => run.brakingOf.get(application) ?? []);
}

function fillSpeeds(sheet: MetricsSheet, run: MeasuredRun, { startS, endS }: CornerPassage): void {
	const { speed } = run;
	const noise = speed.noiseKmh / 2;
	const outside = (atS: number) => (touchesHole(run, atS) ? 'gap' : 'not_reached');
	const known = (atS: number) => (touchesHole(run, atS) ? NaN : atS);
	sheet.set('entryKmh', speedAt(speed, known(startS)), outside(startS), noise);
	sheet.set('exitKmh', speedAt(speed, known(endS)), outside(endS), noise);
	sheet.set('timeS', known(endS) - known(startS), touchesHole(run, startS, endS) ? 'gap' : 'not_reached');
	const holed = touchesHole(run, startS, endS);
	const minimum = holed ? null : minimumSpeed(speed, startS, endS);
	sheet.set('minKmh', minimum?.kmh ?? null, holed ? 'gap' : 'not_reached', minimum?.plusMinusKmh);
	sheet.setPlace('minSpeedM', minimum && { timeS: minimum.timeS }, holed ? 'gap' : 'not_reached');
}

function turnInOf(run: MeasuredRun, before: CornerPassage | undefined, passage: CornerPassage): number | null {
	const { corner, startS, apexS, endS } = passage;
	if (!run.turning || !corner.direction || Number.isNaN(startS + apexS + endS)) return null;
	const notBeforeS = before && before.apexS < startS ? before.apexS : -Infinity;
	return turnIn(run.turning, corner.direction === 'left' ? 1 : -1, { notBeforeS, startS, apexS, endS });
}

/** Without a brake channel: when the car slowed as only brakes slow it. */
function spanBySlowing(
	run: MeasuredRun,
	before: CornerPassage | undefined,
	passage: CornerPassage
): BrakingSpan | null {
	const fromS = before?.apexS || run.placed.channels.timeS[0];
	const seen = decelerationBraking(run.speed, fromS, (passage.apexS + passage.endS) / 2);
	return seen && { startS: seen.onsetS, endS: seen.offS, plusMinusS: seen.plusMinusS, endPlusMinusS: seen.plusMinusS };
}

/** What the driven wheels and the hands did: spinning out of the corner, corrections in it. */
function fillHandling(sheet: MetricsSheet, run: MeasuredRun, passage: CornerPassage, turnInS: number | null): void {
	const { channels, curvaturePerM } = run.placed;
	const { corner, startS, apexS, endS } = passage;
	if (Number.isNaN(startS + apexS + endS)) return sheet.explain(['spinS', 'steerCorrections'], 'not_reached');
	const fromS = turnInS ?? startS;
	if (touchesHole(run, fromS, endS + SPIN_AFTER_S)) return sheet.explain(['spinS', 'steerCorrections'], 'gap');
	sheet.set('spinS', wheelSpin(channels, curvaturePerM, apexS, endS + SPIN_AFTER_S), 'no_channel');
	const steering = channels.steeringDeg && run.turning;
	const sign = corner.direction === 'left' ? 1 : -1;
	const corrections = steering && corner.direction ? steerCorrections(steering, sign, fromS, endS) : null;
	sheet.set('steerCorrections', corrections, 'no_channel');
}

function fillIdleGap(
	sheet: MetricsSheet,
	run: MeasuredRun,
	passage: CornerPassage,
	next: CornerPassage | undefined
): void {
	if (passage.corner.linkedTo === null) return sheet.explain(['idleGapS'], 'not_linked');
	if (!next || !(next.apexS > passage.apexS)) return sheet.explain(['idleGapS'], 'not_reached');
	const gap = idleGap(run.placed, { startS: passage.apexS, endS: next.apexS }, run.brakeSpans, run.fullThrottle);
	sheet.set('idleGapS', gap, 'no_channel');
}
