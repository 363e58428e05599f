import type { Knex } from 'knex';
import { meanDifference } from '../../analysis/targets/meanDifference.ts';
import type { TargetBases } from '../../analysis/targets/limits.ts';
import { scoreRun } from '../../analysis/targets/scoreRun.ts';
import { isSpread } from '../../analysis/targets/targetKinds.ts';
import { median } from '../../analysis/stats/quantile.ts';
import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { FocusPoint, FocusRun } from '../../schemas/focus.ts';
import { US_PER_S } from '../../units.ts';
import type { Viewer } from '../access/viewer.ts';
import {
	findPass,
	listPasses,
	listRunsOf,
	type FoundFocus,
	type LapPasses,
	type ScoredRunRow
} from '../db/focusRepository.ts';
import { encodePublicId } from '../db/publicId.ts';
import { listReferences } from './chooseReference.ts';

/** Runs that scores look at, those before a focus was set among them: a season on one layout is about as many. */
const MOST_RUNS = 40;
/** Runs before it was set that say what was usual. */
const RUNS_BEFORE = 6;
/** A hit rate that moved by less is level: one lap of ten. */
const TREND_SHARE = 0.1;

export type FocusScores = Pick<
	FocusPoint,
	'runs' | 'met' | 'scored' | 'trend' | 'foundS' | 'paidS' | 'metButSlower' | 'proposed'
>;

/**
 * Scores of focus points, computed from the stored metrics each time they are read: a run that is read again, or described as wet
 * since, is scored by what is known now. A run counts when it was driven after the focus was set.
 *
 * @returns scores in the order of the points
 */
export async function scoreFocus(db: Knex, viewer: Viewer, points: readonly FoundFocus[]): Promise<FocusScores[]> {
	const groups = new Map<string, FoundFocus[]>();
	for (const point of points) {
		const key = [point.driver_id, point.layout_id, point.car_id].join(':');
		groups.set(key, [...(groups.get(key) ?? []), point]);
	}
	const scores = new Map<number, FocusScores>();
	for (const group of groups.values()) {
		const [{ driver_id: driverId, layout_id: layoutId, car_id: carId }] = group;
		const runs = await listRunsOf(db, viewer, { driverId, layoutId, carId, most: MOST_RUNS });
		const corners = [...new Set(group.flatMap(({ corner_id }) => corner_id ?? []))];
		const passes = await listPasses(
			db,
			runs.map(({ run_id }) => run_id),
			corners
		);
		for (const point of group) scores.set(point.id, await scoreOne(db, viewer, point, runs, passes));
	}
	return points.map(({ id }) => scores.get(id) ?? nothing());
}

async function scoreOne(
	db: Knex,
	viewer: Viewer,
	point: FoundFocus,
	runs: readonly ScoredRunRow[],
	passes: ReadonlyMap<number, LapPasses>
): Promise<FocusScores> {
	const before = runs.filter(({ sort_at }) => sort_at <= point.set_at).slice(-RUNS_BEFORE);
	const later = runs.filter(
		({ sort_at }) => sort_at > point.set_at && (point.closed_at === null || sort_at <= point.closed_at)
	);
	const passesOf = (run: ScoredRunRow): CornerMetrics[] =>
		(point.corner_id === null ? undefined : passes.get(run.run_id)?.passes.get(point.corner_id)) ?? [];
	const cleanOf = (run: ScoredRunRow) =>
		passes.get(run.run_id)?.laps.filter(({ kind, clean }) => kind === 'timed' && clean) ?? [];
	const cleanPasses = (run: ScoredRunRow): CornerMetrics[] => {
		const clean = new Set(cleanOf(run).map(({ number }) => number));
		return passesOf(run).filter(({ lap }) => clean.has(lap));
	};
	const own = before.flatMap(cleanPasses);
	const bases: TargetBases = {
		own,
		ownLapTimesS: before.flatMap((run) => cleanOf(run).map(({ timeS }) => timeS)),
		...(point.target.base === 'reference' ? await referenceOf(db, viewer, point, runs) : { reference: null })
	};
	const timesOf = (some: readonly CornerMetrics[]) => some.flatMap(({ timeS }) => timeS ?? []);
	const scored = later.map((run): FocusRun => {
		const score = scoreRun(
			point.target,
			{
				conditions: run.conditions,
				laps: passes.get(run.run_id)?.laps ?? [],
				metrics: passesOf(run),
				lengthM: run.length_m
			},
			bases
		);
		return {
			...score,
			run: encodePublicId(run.run_public_id),
			startedAt: run.started_at?.toISOString() ?? null,
			at: run.sort_at.toISOString(),
			runOfDay: run.run_of_day,
			cornerS: known(median(timesOf(cleanPasses(run))))
		};
	});
	const withScore = scored.filter(({ scored: laps }) => laps > 0);
	const last = withScore.at(-1);
	const [beforeS, afterS] = [known(median(timesOf(own))), last?.cornerS ?? null];
	const timesWhere = (outcome: 'met' | 'missed') =>
		later.flatMap((run, i) => {
			const laps = new Set(scored[i].laps.filter((lap) => lap.outcome === outcome).map(({ lap }) => lap));
			return timesOf(passesOf(run).filter(({ lap }) => laps.has(lap)));
		});
	return {
		runs: scored,
		met: scored.reduce((sum, { met }) => sum + met, 0),
		scored: scored.reduce((sum, { scored: laps }) => sum + laps, 0),
		trend: trendOf(withScore),
		foundS: beforeS === null || afterS === null ? null : beforeS - afterS,
		paidS: isSpread(point.target.kind) ? null : meanDifference(timesWhere('met'), timesWhere('missed')),
		metButSlower: scored.reduce((sum, { metButSlower }) => sum + metButSlower, 0),
		proposed: point.state === 'open' && last?.holds === true
	};
}

/** The lap on the shelf that stands for the reference on this layout in this car, and its pass of the corner. */
async function referenceOf(
	db: Knex,
	viewer: Viewer,
	point: FoundFocus,
	runs: readonly ScoredRunRow[]
): Promise<Pick<TargetBases, 'reference' | 'referenceLapTimeS'>> {
	const run = runs.at(-1);
	const version = run && (await versionOf(db, run.run_id));
	if (!version) return { reference: null };
	const references = await listReferences(db, viewer, { ...version, carId: point.car_id });
	const shelved = references.find(({ shelf_name }) => shelf_name !== null);
	if (!shelved) return { reference: null };
	return {
		reference: point.corner_id === null ? null : await findPass(db, shelved.lap_id, point.corner_id),
		referenceLapTimeS: shelved.time_us / US_PER_S
	};
}

async function versionOf(db: Knex, runId: number) {
	return await db('runs')
		.join('analyses', 'analyses.id', 'runs.analysis_id')
		.where({ 'runs.id': runId })
		.first<{ layoutId: number; pathVersion: number; mapVersion: number } | undefined>({
			layoutId: 'analyses.layout_id',
			pathVersion: 'analyses.path_version',
			mapVersion: 'analyses.map_version'
		});
}

function trendOf(runs: readonly FocusRun[]): FocusPoint['trend'] {
	const [last, previous] = [runs.at(-1), runs.at(-2)];
	if (!last || !previous) return null;
	const moved = last.met / last.scored - previous.met / previous.scored;
	return moved > TREND_SHARE ? 'up' : moved < -TREND_SHARE ? 'down' : 'level';
}

const known = (value: number): number | null => (Number.isFinite(value) ? value : null);

function nothing(): FocusScores {
	return { runs: [], met: 0, scored: 0, trend: null, foundS: null, paidS: null, metButSlower: 0, proposed: false };
}
