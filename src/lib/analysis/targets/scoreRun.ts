import type { CornerMetrics, LapDocument } from '../../schemas/analysisDocument.ts';
import type { LapScore, RunScore, Target, UnscoredReason } from '../../schemas/target.ts';
import { limitsOf, medianOf, spreadOf, type Limits, type TargetBases } from './limits.ts';
import { meanDifference } from './meanDifference.ts';
import { readMetric, shortWay, type Measured } from './readMetric.ts';
import { isMeasured, isSpread, MEASURED_KINDS, SPREAD_KINDS } from './targetKinds.ts';

export type ScoredLap = Pick<LapDocument, 'number' | 'kind' | 'clean' | 'reasons' | 'timeS' | 'plusMinusS'>;

export interface ScoredRun {
	conditions: 'dry' | 'damp' | 'wet' | 'unknown';
	/** in driving order */
	laps: readonly ScoredLap[];
	/** of the target's corner; laps without a row were not measured there */
	metrics: readonly CornerMetrics[];
	/** of the layout: places are compared the short way round */
	lengthM: number;
}

/** A corner that took longer than usual by more than this counts as slower: half of what is worth a finding. */
const SLOWER_S = 0.01;

/**
 * Scores each lap of a run against a target, and the run as a whole: how many laps met it, whether it holds, and whether meeting it
 * paid.
 *
 * A lap is scored where it is clean, within the target's scope, and the value is known. A value beyond a limit by no more than its ±
 * counts as met, and is marked. A spread is judged once for the run: each of its scored laps bears that answer.
 *
 * @param target limits in the unit of its kind
 * @param run    one run on the target's layout; metrics of the target's corner only
 * @param bases  what the limits are added to, where the target says so, and the usual corner time
 * @returns scores of the timed laps, in their order
 */
export function scoreRun(target: Target, run: ScoredRun, bases: TargetBases): RunScore {
	const byLap = new Map(run.metrics.map((metrics) => [metrics.lap, metrics]));
	const timed = run.laps.filter(({ kind }) => kind === 'timed');
	const inScope = timed.filter((lap) => reasonOutOfScope(target, run, lap) === null);
	const spread = isSpread(target.kind)
		? spreadOf(
				inScope.flatMap(({ number }) => byLap.get(number) ?? []),
				SPREAD_KINDS[target.kind],
				run.lengthM
			)
		: null;
	const limits = limitsOf(target, bases, run.lengthM);
	const usualS = medianOf(bases.own.map(({ timeS }) => timeS));

	const laps = timed.map((lap): LapScore => {
		const outOfScope = reasonOutOfScope(target, run, lap);
		if (outOfScope) return unscored(lap.number, outOfScope);
		if (limits === null) return unscored(lap.number, 'no_base');
		const metrics = byLap.get(lap.number);
		if (isSpread(target.kind)) {
			return spread === null
				? unscored(lap.number, 'too_few_laps')
				: judge(lap.number, { value: spread, plusMinus: 0 }, limits, null);
		}
		const measured = measure(target, lap, metrics);
		if (measured === null) return unscored(lap.number, 'not_measured');
		const isPlace = isMeasured(target.kind) && MEASURED_KINDS[target.kind].isPlace;
		const score = judge(lap.number, measured, limits, isPlace ? run.lengthM : null);
		const asks = score.outcome === 'met' && target.notSlower && target.kind !== 'lap_time';
		return asks ? { ...score, slower: isSlower(metrics?.timeS ?? null, usualS) } : score;
	});
	return { laps, ...summarise(target, laps, byLap) };
}

function reasonOutOfScope(target: Target, run: ScoredRun, lap: ScoredLap): UnscoredReason | null {
	if (target.kind === 'free') return 'free_text';
	if (target.scope.dryOnly && run.conditions !== 'dry') return 'not_dry';
	if (target.scope.afterLap !== null && lap.number <= target.scope.afterLap) return 'early_lap';
	if (lap.reasons.includes('neutralised')) return 'neutralised';
	return lap.clean ? null : 'not_clean';
}

function measure(target: Target, lap: ScoredLap, metrics: CornerMetrics | undefined): Measured | null {
	if (target.kind === 'lap_time') return { value: lap.timeS, plusMinus: lap.plusMinusS };
	return isMeasured(target.kind) && metrics ? readMetric(target.kind, metrics) : null;
}

/** @param wrapM length of the lap where the value is a place on it, else null */
function judge(lap: number, { value, plusMinus }: Measured, limits: Limits, wrapM: number | null): LapScore {
	const outside = distanceOutside(value, limits, wrapM);
	const isMet = outside <= plusMinus;
	return {
		lap,
		outcome: isMet ? 'met' : 'missed',
		reason: null,
		value,
		missedBy: isMet ? 0 : outside,
		withinUncertainty: isMet && outside > 0,
		slower: null
	};
}

function distanceOutside(value: number, { least, most }: Limits, wrapM: number | null): number {
	const beyond = (by: number) => (Number.isFinite(by) && wrapM !== null ? shortWay(by, wrapM) : by);
	return Math.max(0, beyond(value - most), beyond(least - value));
}

function isSlower(timeS: number | null, usualS: number | null): boolean | null {
	return timeS === null || usualS === null ? null : timeS > usualS + SLOWER_S;
}

function unscored(lap: number, reason: UnscoredReason): LapScore {
	return { lap, outcome: 'unscored', reason, value: null, missedBy: null, withinUncertainty: false, slower: null };
}

function summarise(
	{ kind, scope: { holdsOver } }: Target,
	laps: readonly LapScore[],
	byLap: ReadonlyMap<number, CornerMetrics>
): Omit<RunScore, 'laps'> {
	const scored = laps.filter(({ outcome }) => outcome !== 'unscored');
	const met = scored.filter(({ outcome }) => outcome === 'met');
	const missed = scored.filter(({ outcome }) => outcome === 'missed');
	const timesOf = (some: readonly LapScore[]) => some.flatMap(({ lap }) => byLap.get(lap)?.timeS ?? []);
	const last = holdsOver ? scored.slice(-holdsOver.of) : [];
	return {
		met: met.length,
		scored: scored.length,
		holds: holdsOver
			? last.length === holdsOver.of && last.filter(({ outcome }) => outcome === 'met').length >= holdsOver.laps
			: null,
		paidS: isSpread(kind) ? null : meanDifference(timesOf(met), timesOf(missed)),
		metButSlower: met.filter(({ slower }) => slower === true).length
	};
}
