import type { MetricReason } from '../../schemas/codes.ts';
import type { BrakingSpan } from './brakeMetrics.ts';
import { coasting, overlap } from './coasting.ts';
import type { CornerPassage } from './cornerPassages.ts';
import type { Signal } from './crossing.ts';
import type { Braking } from './measureBraking.ts';
import { touchesHole, type MeasuredRun } from './measuredRun.ts';
import type { MetricsSheet } from './metricsSheet.ts';
import { throttleEvents, type ThrottleEvents } from './throttleEvents.ts';

const COASTING_FIELDS = ['coastingS', 'coastBeforeS', 'coastBetweenS', 'coastAfterS'] as const;
const THROTTLE_FIELDS = [
	'liftM',
	'smallestOpeningPct',
	'smallestOpeningM',
	'pickUpM',
	'fullThrottleM',
	'secondLiftS',
	'overlapS',
	...COASTING_FIELDS
] as const;
/** A lifted corner is lifted for at most this long before its start. */
const LIFT_BEFORE_S = 1;

/**
 * Fills in what the throttle did for a corner, alone and together with the brake.
 *
 * @param sheet    to be filled
 * @param around   the passage, and those before and behind it
 * @param brakings of this corner, in order
 * @param span     see `fillBrake`
 * @param nextOnsetS onset of the next corner's braking, null where it has none
 */
export function fillThrottle(
	sheet: MetricsSheet,
	run: MeasuredRun,
	around: { before: CornerPassage | undefined; passage: CornerPassage; next: CornerPassage | undefined },
	brakings: Braking[],
	span: BrakingSpan | null,
	nextOnsetS: number | null
): void {
	const { before, passage, next } = around;
	const { throttle } = run;
	if (!throttle) return sheet.explain(THROTTLE_FIELDS, 'no_channel');
	if (Number.isNaN(passage.startS + passage.endS)) return sheet.explain(THROTTLE_FIELDS, 'not_reached');
	if (span && Number.isNaN(span.endS)) return sheet.explain(THROTTLE_FIELDS, 'gap');
	const onsetS = span && Number.isNaN(span.startS) ? (brakings.at(0)?.leavesRestS ?? null) : (span?.startS ?? null);
	const endOfRunS = throttle.timeS[throttle.timeS.length - 1];
	const untilS = nextOnsetS ?? (next?.apexS || endOfRunS);
	const events = throttleEvents(
		throttle,
		{
			earliestS: before?.apexS || throttle.timeS[0],
			brakeOnsetS: onsetS,
			brakeOffS: span?.endS ?? null,
			fromS: passage.startS - LIFT_BEFORE_S,
			toS: Math.min(passage.endS, untilS),
			untilS,
			nextStartS: next?.startS || endOfRunS
		},
		run.quickestLift
	);
	fillEvents(sheet, events, next ? 'linked' : 'not_reached');
	fillBoth(sheet, run, throttle, events, brakings, span);
}

function fillEvents(sheet: MetricsSheet, events: ThrottleEvents, notFound: MetricReason): void {
	if (events.kind === 'flat' || events.kind === 'steady') {
		const reason = events.kind === 'flat' ? 'flat' : 'no_lift_here';
		sheet.explain(['liftM', 'smallestOpeningPct', 'smallestOpeningM', 'pickUpM', 'fullThrottleM'], reason);
		sheet.set('secondLiftS', 0, reason);
		return;
	}
	const pickedUp = events.pickUp !== null || events.kind === 'partly';
	sheet.setPlace('liftM', events.lift, 'linked');
	sheet.set('smallestOpeningPct', events.smallestPct, 'gap');
	sheet.setPlace('smallestOpeningM', { timeS: events.smallestS }, 'gap');
	sheet.setPlace('pickUpM', events.pickUp, events.kind === 'partly' ? 'partly_lifted' : notFound);
	sheet.setPlace('fullThrottleM', events.full, pickedUp ? 'never_full' : notFound);
	sheet.set('secondLiftS', pickedUp ? events.secondLiftS : null, notFound);
}

/** Overlap and coasting, which need both pedals. */
function fillBoth(
	sheet: MetricsSheet,
	run: MeasuredRun,
	throttle: Signal,
	events: ThrottleEvents,
	brakings: Braking[],
	span: BrakingSpan | null
): void {
	const { brake } = run;
	if (!brake) return sheet.explain(['overlapS', ...COASTING_FIELDS], 'no_channel');
	let overlapS = 0;
	for (const { onset, off } of brakings) {
		if (onset && off) overlapS += overlap(throttle, brake, { startS: onset.timeS, endS: off.timeS });
	}
	sheet.set('overlapS', overlapS, 'gap');
	const { lift, pickUp } = events;
	if (events.kind === 'flat') sheet.explain(COASTING_FIELDS, 'flat');
	else if (events.kind === 'steady' || !lift) sheet.explain(COASTING_FIELDS, 'no_lift_here');
	else if (events.kind === 'partly') for (const field of COASTING_FIELDS) sheet.set(field, 0, 'gap');
	else if (!pickUp) sheet.explain(COASTING_FIELDS, sheet.metrics.reasons.pickUpM);
	else if (touchesHole(run, lift.timeS, pickUp.timeS)) sheet.explain(COASTING_FIELDS, 'gap');
	else {
		const coasted = coasting(throttle, { startS: lift.timeS, endS: pickUp.timeS }, run.brakeSpans, run.quickestLift);
		sheet.set('coastingS', coasted.totalS, 'gap', (span?.endPlusMinusS ?? 0) + pickUp.plusMinusS);
		sheet.set('coastBeforeS', coasted.beforeS, 'gap', lift.plusMinusS + (span?.plusMinusS ?? 0));
		sheet.set('coastBetweenS', coasted.betweenS, 'gap');
		sheet.set('coastAfterS', coasted.afterS, 'gap', (span?.endPlusMinusS ?? 0) + pickUp.plusMinusS);
	}
}
