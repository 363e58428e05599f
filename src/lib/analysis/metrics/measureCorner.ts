import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { MetricReason } from '../../schemas/codes.ts';
import { placeAtTime } from '../trace/placeTime.ts';
import { coasting, overlap, type Span } from './coasting.ts';
import type { CornerPassage } from './cornerPassages.ts';
import { decelerationBraking } from './decelerationBraking.ts';
import { idleGap } from './idleGap.ts';
import type { Braking } from './measureBraking.ts';
import type { MeasuredRun } from './measuredRun.ts';
import { minimumSpeed, speedAt } from './steadySpeed.ts';
import { throttleEvents, type ThrottleEvents } from './throttleEvents.ts';
import { turnIn } from './turnIn.ts';

/** Fields of a corner that are numbers or null. */
type Field = Exclude<keyof CornerMetrics, 'lap' | 'corner' | 'releaseProgressive' | 'plusMinus' | 'reasons'>;

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
	'lightHoldS'
] as const;
const THROTTLE_FIELDS = [
	'liftM',
	'smallestOpeningPct',
	'smallestOpeningM',
	'pickUpM',
	'fullThrottleM',
	'secondLiftS',
	'overlapS',
	'coastingS'
] as const;
/** A lifted corner is lifted for at most this long before its start. */
const LIFT_BEFORE_S = 1;

/**
 * Every metric of one corner in one lap, from the run's own samples. Places count from the line of the lap and run on across it, so
 * that a corner beyond it lies beyond the lap's length, or below 0.
 *
 * @param run    the run, prepared
 * @param index  which passage of `run.passages`; its lap must be known
 * @returns what cannot be known is null, with its reason
 */
export function measureCorner(run: MeasuredRun, index: number): CornerMetrics {
	const passage = run.passages[index];
	const metrics = emptyMetrics(passage);
	measureSpeeds(run, passage, metrics);
	const turnInS = turnInOf(run, index);
	set(metrics, 'turnInM', placeOf(run, passage, turnInS), 'no_channel');
	const braking = passage.braking ? (run.brakingOf.get(passage.braking) ?? null) : null;
	const span = brakingSpan(run, index, braking);
	measureBrake(run, passage, metrics, braking, span);
	measureTrail(run, passage, metrics, span, turnInS);
	measureThrottle(run, index, metrics, braking, span);
	measureIdleGap(run, index, metrics);
	return metrics;
}

function emptyMetrics({ lap, corner }: CornerPassage): CornerMetrics {
	return {
		lap: lap?.number ?? 0,
		corner: corner.number,
		onsetM: null,
		onsetS: null,
		peakPct: null,
		peakRawPct: null,
		peakM: null,
		riseS: null,
		releaseStartM: null,
		releaseEndM: null,
		releaseS: null,
		releaseProgressive: null,
		dabs: null,
		lightHoldS: null,
		trailS: null,
		trailM: null,
		turnInM: null,
		entryKmh: null,
		minKmh: null,
		minSpeedM: null,
		liftM: null,
		smallestOpeningPct: null,
		smallestOpeningM: null,
		pickUpM: null,
		fullThrottleM: null,
		secondLiftS: null,
		overlapS: null,
		coastingS: null,
		exitKmh: null,
		idleGapS: null,
		lockUps: null,
		timeS: null,
		plusMinus: {},
		reasons: {}
	};
}

/** Sets a field, or, where the value is not a number, leaves it null and says why. */
function set(metrics: CornerMetrics, field: Field, value: number | null, reason: MetricReason, plusMinus = 0): void {
	if (value !== null && Number.isFinite(value)) {
		metrics[field] = value;
		if (plusMinus > 0) metrics.plusMinus[field] = plusMinus;
	} else {
		metrics.reasons[field] = reason;
	}
}

function explain(metrics: CornerMetrics, fields: readonly string[], reason: MetricReason): void {
	for (const field of fields) metrics.reasons[field] = reason;
}

function placeOf(run: MeasuredRun, passage: CornerPassage, timeS: number | null): number | null {
	return timeS === null ? null : placeAtTime(run.placed, timeS) - passage.baseM;
}

/** m by which a place is uncertain when its time is. */
function spread(run: MeasuredRun, atS: number, plusMinusS: number): number {
	return (speedAt(run.speed, atS) / 3.6) * plusMinusS;
}

function measureSpeeds(run: MeasuredRun, passage: CornerPassage, metrics: CornerMetrics): void {
	const { startS, endS } = passage;
	const { speed } = run;
	const noise = speed.noiseKmh / 2;
	set(metrics, 'entryKmh', speedAt(speed, startS), 'not_reached', noise);
	set(metrics, 'exitKmh', speedAt(speed, endS), 'not_reached', noise);
	set(metrics, 'timeS', endS - startS, 'not_reached');
	const minimum = minimumSpeed(speed, startS, endS);
	set(metrics, 'minKmh', minimum?.kmh ?? null, 'not_reached', minimum?.plusMinusKmh);
	set(metrics, 'minSpeedM', placeOf(run, passage, minimum?.timeS ?? null), 'not_reached');
}

function turnInOf(run: MeasuredRun, index: number): number | null {
	const { turning } = run;
	const { corner, startS, apexS, endS } = run.passages[index];
	if (!turning || !corner.direction || Number.isNaN(startS) || Number.isNaN(endS)) return null;
	const notBeforeS = run.passages[index - 1]?.apexS ?? -Infinity;
	return turnIn(turning, corner.direction === 'left' ? 1 : -1, {
		notBeforeS: Number.isNaN(notBeforeS) ? -Infinity : notBeforeS,
		startS,
		apexS,
		endS
	});
}

/** Onset and off of the corner's braking, from the brake or, without one, from the car's slowing. */
interface BrakingSpan extends Span {
	plusMinusS: number;
	endPlusMinusS: number;
	fromDeceleration: boolean;
}

function brakingSpan(run: MeasuredRun, index: number, braking: Braking | null): BrakingSpan | null {
	if (braking) {
		return {
			startS: braking.onset?.timeS ?? NaN,
			endS: braking.off?.timeS ?? NaN,
			plusMinusS: braking.onset?.plusMinusS ?? NaN,
			endPlusMinusS: braking.off?.plusMinusS ?? NaN,
			fromDeceleration: false
		};
	}
	if (run.brake) return null;
	const { apexS, endS } = run.passages[index];
	const fromS = run.passages[index - 1]?.apexS ?? run.placed.channels.timeS[0];
	const seen = decelerationBraking(run.speed, fromS, (apexS + endS) / 2);
	return (
		seen && {
			startS: seen.onsetS,
			endS: seen.offS,
			plusMinusS: seen.plusMinusS,
			endPlusMinusS: seen.plusMinusS,
			fromDeceleration: true
		}
	);
}

function measureBrake(
	run: MeasuredRun,
	passage: CornerPassage,
	metrics: CornerMetrics,
	braking: Braking | null,
	span: BrakingSpan | null
): void {
	if (!span) {
		explain(metrics, BRAKE_FIELDS, run.brake ? 'no_brake_here' : 'no_channel');
		return;
	}
	set(metrics, 'onsetM', placeOf(run, passage, span.startS), 'gap', spread(run, span.startS, span.plusMinusS));
	set(metrics, 'onsetS', span.startS, 'gap', span.plusMinusS);
	set(
		metrics,
		'releaseEndM',
		placeOf(run, passage, span.endS),
		'not_released',
		spread(run, span.endS, span.endPlusMinusS)
	);
	if (!braking) {
		explain(metrics, SHAPE_FIELDS, 'no_channel');
		explain(metrics, ['onsetM', 'onsetS', 'releaseEndM', 'trailS', 'trailM'], 'from_deceleration');
		return;
	}
	if (run.placed.channels.brakeUnit === 'switch') {
		explain(metrics, SHAPE_FIELDS, 'brake_switch');
		return;
	}
	const noise = run.brake?.noise ?? 0;
	set(metrics, 'peakPct', braking.peakPct, 'gap', noise);
	set(metrics, 'peakRawPct', braking.peakRawPct, 'gap', 3 * noise);
	set(metrics, 'peakM', placeOf(run, passage, braking.peakS), 'gap');
	set(metrics, 'riseS', braking.riseS, 'gap', span.plusMinusS);
	set(metrics, 'releaseStartM', placeOf(run, passage, braking.releaseStartS), 'gap');
	set(metrics, 'releaseS', span.endS - braking.releaseStartS, 'not_released', span.endPlusMinusS);
	set(metrics, 'dabs', braking.dabs + passage.furtherBrakings, 'gap');
	metrics.releaseProgressive = braking.releaseProgressive;
	if (braking.releaseProgressive === null) metrics.reasons.releaseProgressive = 'too_coarse';
	set(metrics, 'lightHoldS', lightHold(run, passage, braking), 'gap', Math.max(run.speed.sampleS / 2, noise / 10));
	if (run.placed.channels.brakeScaleAssumed) explain(metrics, ['peakPct', 'peakRawPct'], 'brake_scale_assumed');
}

/** The longest light hold while the car turns, s; 0 for none. */
function lightHold(run: MeasuredRun, { startS, endS }: CornerPassage, { lightHolds }: Braking): number {
	let longest = 0;
	for (const hold of lightHolds) {
		const turningS = Math.min(hold.endS, endS) - Math.max(hold.startS, startS);
		if (turningS > longest) longest = turningS;
	}
	return longest >= 0.2 - 1e-9 ? longest : 0;
}

function measureTrail(
	run: MeasuredRun,
	passage: CornerPassage,
	metrics: CornerMetrics,
	span: BrakingSpan | null,
	turnInS: number | null
): void {
	if (!span) return;
	if (turnInS === null) {
		explain(metrics, ['trailS', 'trailM'], 'no_channel');
		return;
	}
	const fromS = Math.max(span.startS, turnInS);
	const trails = span.endS > fromS;
	set(metrics, 'trailS', trails ? span.endS - fromS : span.endS <= fromS ? 0 : NaN, 'not_released');
	const way = trails ? placeAtTime(run.placed, span.endS) - placeAtTime(run.placed, fromS) : 0;
	set(metrics, 'trailM', span.endS >= 0 ? way : NaN, 'not_released');
}

function measureThrottle(
	run: MeasuredRun,
	index: number,
	metrics: CornerMetrics,
	braking: Braking | null,
	span: BrakingSpan | null
): void {
	const passage = run.passages[index];
	const { throttle } = run;
	if (!throttle) {
		explain(metrics, THROTTLE_FIELDS, 'no_channel');
		return;
	}
	if (Number.isNaN(passage.startS) || Number.isNaN(passage.endS)) {
		explain(metrics, THROTTLE_FIELDS, 'not_reached');
		return;
	}
	if (span && Number.isNaN(span.startS + span.endS)) {
		explain(metrics, THROTTLE_FIELDS, 'gap');
		return;
	}
	const next = run.passages[index + 1];
	const nextBraking = next?.braking ? run.brakingOf.get(next.braking) : null;
	const endOfRun = throttle.timeS[throttle.timeS.length - 1];
	const events = throttleEvents(
		throttle,
		{
			earliestS: run.passages[index - 1]?.apexS || throttle.timeS[0],
			brakeOnsetS: span?.startS ?? null,
			brakeOffS: span?.endS ?? null,
			fromS: passage.startS - LIFT_BEFORE_S,
			toS: passage.endS,
			untilS: nextBraking?.onset?.timeS ?? (next?.apexS || endOfRun),
			nextStartS: next?.startS || endOfRun
		},
		run.quickestLift
	);
	setThrottle(run, passage, metrics, events, next !== undefined);
	if (!run.brake) {
		explain(metrics, ['overlapS', 'coastingS'], 'no_channel');
		return;
	}
	set(metrics, 'overlapS', span && !span.fromDeceleration ? overlap(throttle, run.brake, span) : 0, 'gap');
	if (events.kind === 'flat' || events.kind === 'steady' || !events.lift) {
		metrics.reasons.coastingS = events.kind === 'flat' ? 'flat' : 'no_lift_here';
		return;
	}
	if (events.kind === 'partly') {
		set(metrics, 'coastingS', 0, 'gap');
		return;
	}
	const pickUp = events.pickUp;
	if (!pickUp) {
		metrics.reasons.coastingS = metrics.reasons.pickUpM;
		return;
	}
	const coasted = coasting(
		throttle,
		{ startS: events.lift.timeS, endS: pickUp.timeS },
		run.brakeSpans,
		run.quickestLift
	);
	set(metrics, 'coastingS', coasted.totalS, 'gap', (braking?.off?.plusMinusS ?? 0) + pickUp.plusMinusS);
}

function setThrottle(
	run: MeasuredRun,
	passage: CornerPassage,
	metrics: CornerMetrics,
	events: ThrottleEvents,
	hasNext: boolean
): void {
	const place = (field: Field, moment: { timeS: number; plusMinusS: number } | null, reason: MetricReason) =>
		set(
			metrics,
			field,
			placeOf(run, passage, moment?.timeS ?? null),
			reason,
			moment ? spread(run, moment.timeS, moment.plusMinusS) : 0
		);
	const notFound: MetricReason = hasNext ? 'linked' : 'not_reached';
	if (events.kind === 'flat' || events.kind === 'steady') {
		const reason = events.kind === 'flat' ? 'flat' : 'no_lift_here';
		explain(metrics, ['liftM', 'smallestOpeningPct', 'smallestOpeningM', 'pickUpM', 'fullThrottleM'], reason);
		metrics.secondLiftS = 0;
		return;
	}
	place('liftM', events.lift, 'linked');
	set(metrics, 'smallestOpeningPct', events.smallestPct, 'gap');
	set(metrics, 'smallestOpeningM', placeOf(run, passage, events.smallestS), 'gap');
	place('pickUpM', events.pickUp, events.kind === 'partly' ? 'partly_lifted' : notFound);
	place('fullThrottleM', events.full, events.pickUp || events.kind === 'partly' ? 'never_full' : notFound);
	set(metrics, 'secondLiftS', events.pickUp || events.kind === 'partly' ? events.secondLiftS : null, notFound);
}

function measureIdleGap(run: MeasuredRun, index: number, metrics: CornerMetrics): void {
	const passage = run.passages[index];
	const next = run.passages[index + 1];
	if (passage.corner.linkedTo === null) {
		metrics.reasons.idleGapS = 'not_linked';
		return;
	}
	if (!next || !(next.apexS > passage.apexS)) {
		metrics.reasons.idleGapS = 'not_reached';
		return;
	}
	const gap = idleGap(run.placed, { startS: passage.apexS, endS: next.apexS }, run.brakeSpans, run.fullThrottle);
	set(metrics, 'idleGapS', gap, 'no_channel');
}
