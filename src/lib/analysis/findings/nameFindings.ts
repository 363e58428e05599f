import type { Corner, CornerMetrics, Evidence, Finding, LedgerRow } from '../../schemas/analysisDocument.ts';
import type { FindingCode } from '../../schemas/codes.ts';
import { KMH_PER_MPS } from '../../units.ts';
import type { LossTable } from '../compare/attributeLoss.ts';
import type { CornerPlaces } from '../compare/cornerPlaces.ts';
import { gapIndex, type SpeedGap } from '../compare/speedGap.ts';
import { CARRIED_IN, poolOf, type StageKind } from '../compare/stages.ts';
import type { LapGrid } from '../model.ts';
import { gripShareAt, type GripEnvelope } from '../car/gripEnvelope.ts';
import { adviseOn } from './adviseOn.ts';
import { brakingStrength } from './brakingStrength.ts';
import * as causes from './causes.ts';
import type { Cause, CauseShare, CornerCase } from './causes.ts';
import { chainCause, judgeChains } from './chains.ts';
import { UNKNOWN_CIRCUMSTANCES } from './circumstances.ts';
import { corneringAt } from './cornering.ts';
import { differenceOf, evidenceOf, type MetricField, type MetricsPair } from './difference.ts';
import { findingText } from './findingText.ts';
import { judgeHabit } from './habit.ts';
import { techniquesOf } from './techniques.ts';

/** A cause that costs less than this is not named; the loss stays with what nothing explains. */
const LEAST_COST_S = 0.01;
/** Car, tow or wind, what the lap before left, and what is carried in are only told from here on. */
const LEAST_CARRIED_S = 0.01;
/** Arriving faster than the reference by this much can be why the rest of the corner is slow. */
const LEAST_EXCESS_KMH = 2;
/** A share of a cost below this is rounding, not a place where time went. */
const LEAST_SHARE_S = 0.0005;
/** ± of a cost that every Δ carries. */
const DELTA_PLUS_MINUS_S = 0.002;

export interface FindingsInput {
	places: readonly CornerPlaces[];
	rows: readonly LedgerRow[];
	losses: LossTable;
	gap: SpeedGap;
	driver: { grid: LapGrid; metrics: readonly CornerMetrics[] };
	reference: { grid: LapGrid; metrics: readonly CornerMetrics[] };
	/** metrics of the driver's clean laps, for habits */
	cleanMetrics: readonly CornerMetrics[];
	/** the corner map, for chains of linked corners */
	corners: readonly Corner[];
	/** what each lap's run has shown of the car's grip; null where not known */
	grip: { driver: GripEnvelope | null; reference: GripEnvelope | null };
}

/** A cause with what it costs in each ledger row. */
interface Charged {
	corner: number;
	cause: Cause;
	byRow: Float64Array;
}

const CAUSES_OF: Partial<Record<StageKind, (c: CornerCase) => CauseShare[]>> = {
	coastBefore: causes.causesBeforeBrake,
	approach: causes.causesOfEarlyBraking,
	lateBrake: causes.causesOfLateBraking,
	slowing: (c) => causes.causesOfSlowing(c, true),
	rolling: (c) => causes.causesOfSlowing(c, false),
	pickUp: causes.causesOfLatePickUp,
	ramp: causes.causesOfSlowOpening,
	secondLift: causes.causesOfSecondLift,
	idle: causes.causesOfIdleGap
};
const KINDS = Object.keys(CAUSES_OF) as (keyof typeof CAUSES_OF)[];

const total = (byRow: Float64Array): number => byRow.reduce((sum, lossS) => sum + lossS, 0);

/**
 * Names what cost the time: each stage's loss goes to the cause whose metric stands outside its ±, causes of one kind in a corner
 * are one finding, and techniques that differ without a cost follow. Sorted by cost.
 */
export function nameFindings(input: FindingsInput): Finding[] {
	const { places, rows, losses, driver, reference } = input;
	const { lengthM } = reference.grid;
	const charged: Charged[] = runUpCauses(input);
	const techniques: Charged[] = [];
	const chains = judgeChains(input.corners, rows);
	places.forEach((place, k) => {
		const of = (metrics: readonly CornerMetrics[]) => metrics.find((m) => m.corner === place.number);
		const c: CornerCase = {
			place,
			pair: { driver: of(driver.metrics), reference: of(reference.metrics), apexM: place.apexM, lengthM },
			strength: brakingStrength(driver.grid, reference.grid, place),
			cornering: corneringAt(driver.grid, reference.grid, place),
			gripShare: gripShares(input, place),
			ownLaps: input.cleanMetrics.filter((m) => m.corner === place.number),
			driverGrid: driver.grid,
			referenceGrid: reference.grid
		};
		const here: Charged[] = [];
		for (const kind of KINDS) {
			const byRow = losses.get(poolOf(k + 1, kind));
			if (!byRow || total(byRow) === 0) continue;
			for (const { cause, share } of CAUSES_OF[kind]?.(c) ?? []) charge(here, place.number, cause, byRow, share);
		}
		const named = blameEntry(c, here).filter(({ byRow }) => Math.abs(total(byRow)) >= LEAST_COST_S);
		for (const { cause } of named) if (cause.code === 'exit_speed_low') addStraight(cause, place, rows[k + 1]);
		charged.push(...named, ...straightCause(input, k + 1, place.corner));
		const chain = chains.find(({ corners }) => corners.at(-1) === place.number);
		const inChain = chain ? chainCause(chain, c.pair) : null;
		for (const cause of [...(inChain ? [inChain] : []), ...techniquesOf(c)]) {
			if (!named.some((other) => isSaidBy(cause.code, other.cause.code)))
				techniques.push({ corner: place.number, cause, byRow: new Float64Array(rows.length) });
		}
	});
	const findings = charged.map((one) => toFinding(one, input));
	const costless = techniques.map((one) => toFinding(one, input));
	const all = [...findings, ...carriedIn(findings, rows), ...costless].sort((a, b) => (b.costS ?? 0) - (a.costS ?? 0));
	return adviseOn(all, UNKNOWN_CIRCUMSTANCES).map(({ finding, drill }) => ({ ...finding, drill }));
}

/** From this length on a straight behind a corner is worth a word. */
const LONG_STRAIGHT_M = 400;

/** What makes a poor exit dear: the straight behind it. */
function addStraight(cause: Cause, { endM }: CornerPlaces, row: LedgerRow | undefined): void {
	const lengthM = row ? row.endM - endM : 0;
	if (lengthM < LONG_STRAIGHT_M) return;
	const driver = Math.round(lengthM / 10) * 10;
	cause.evidence.push({ quantity: 'straight', unit: 'm', driver, reference: null, atM: endM, plusMinus: null });
}

/** A technique that a charged cause tells already. */
const TOLD_BY: Partial<Record<FindingCode, readonly FindingCode[]>> = {
	pedal_change_slow: ['coasting'],
	peak_over: ['harder_no_gain'],
	lock_up: ['rear_lock'],
	chain_exit_low: []
};

const isSaidBy = (technique: FindingCode, charged: FindingCode): boolean =>
	technique === charged || (TOLD_BY[technique]?.includes(charged) ?? false);

/** Half of the stretch about the apex over which grip is read, by the corner's length. */
const GRIP_SHARE_HALF = 0.2;

function gripShares({ grip, driver, reference }: FindingsInput, place: CornerPlaces): CornerCase['gripShare'] {
	if (!grip.driver || !grip.reference) return null;
	const half = GRIP_SHARE_HALF * (place.endM - place.startM);
	const of = (envelope: GripEnvelope, grid: LapGrid) =>
		gripShareAt(envelope, grid, place.apexM - half, place.apexM + half);
	const shares = { driver: of(grip.driver, driver.grid), reference: of(grip.reference, reference.grid) };
	return shares.driver === null || shares.reference === null
		? null
		: { driver: shares.driver, reference: shares.reference };
}

function charge(into: Charged[], corner: number, cause: Cause, byRow: Float64Array, share: number): void {
	const known = into.find((other) => other.cause.code === cause.code);
	const part = byRow.map((lossS) => lossS * share);
	if (!known) into.push({ corner, cause, byRow: part });
	else {
		// a cause that stands on its first choice of metric says more than the one before
		if (cause.evidence.length > known.cause.evidence.length || cause.field === 'onsetM') known.cause = cause;
		part.forEach((lossS, row) => (known.byRow[row] += lossS));
	}
}

/** What an entry that is too fast brings about: it is charged with it, less what it gained. */
const CONSEQUENCES: readonly FindingCode[] = [
	'min_speed_low',
	'pick_up_late',
	'coasting',
	'exit_speed_low',
	'pick_up_hesitant',
	'line',
	'grip_unused',
	'release_long',
	'brake_late'
];

function blameEntry(c: CornerCase, here: Charged[]): Charged[] {
	const entry = differenceOf(c.pair, 'entryKmh');
	if (!entry || !(entry.by > Math.max(entry.plusMinus, LEAST_EXCESS_KMH))) return here;
	const pickUp = differenceOf(c.pair, 'pickUpM');
	const slowest = differenceOf(c.pair, 'minSpeedM');
	const waits = (pickUp?.counts && pickUp.by > 0) || (slowest?.counts && slowest.by > 0);
	const taken = here.filter(({ cause }) => CONSEQUENCES.includes(cause.code));
	if (!waits || taken.length === 0) return here;
	const byRow = new Float64Array(taken[0].byRow.length);
	for (const one of taken) one.byRow.forEach((lossS, row) => (byRow[row] += lossS));
	if (!(total(byRow) > 0)) return here;
	const late = taken.find(({ cause }) => cause.code === 'brake_late');
	const evidence = [evidenceOf(c.pair, 'entryKmh', c.place.corner.startM)];
	if (pickUp?.counts && pickUp.by > 0) evidence.push(evidenceOf(c.pair, 'pickUpM', null));
	const cause: Cause = late?.cause ?? { code: 'entry_fast', field: 'entryKmh', evidence };
	return [...here.filter((one) => !taken.includes(one)), { corner: c.place.number, cause, byRow }];
}

const speedsAt = (gap: SpeedGap, atM: number, quantity: string): Evidence => {
	const i = gapIndex(gap, atM);
	return {
		quantity,
		unit: 'km/h',
		driver: gap.driverMps[i] * KMH_PER_MPS,
		reference: gap.referenceMps[i] * KMH_PER_MPS,
		atM,
		plusMinus: null
	};
};

/** What the lap began with, and the run-up's own straight. */
function runUpCauses(input: FindingsInput): Charged[] {
	const byRow = input.losses.get(CARRIED_IN);
	const evidence = [speedsAt(input.gap, 0, 'lineSpeed')];
	const brought: Charged[] =
		byRow && Math.abs(total(byRow)) >= LEAST_CARRIED_S
			? [{ corner: 0, cause: { code: 'carried_in', field: null, evidence }, byRow }]
			: [];
	return [...brought, ...straightCause(input, 0, null)];
}

function straightCause(input: FindingsInput, owner: number, corner: Corner | null): Charged[] {
	const byRow = input.losses.get(poolOf(owner, 'straight'));
	if (!byRow || Math.abs(total(byRow)) < LEAST_CARRIED_S) return [];
	const row = input.rows[owner];
	const evidence = [speedsAt(input.gap, Math.max(row.endM - 1, row.entryM), 'straightSpeed')];
	return [{ corner: corner?.number ?? 0, cause: { code: 'car_or_wind', field: null, evidence }, byRow }];
}

function toFinding({ corner, cause, byRow }: Charged, input: FindingsInput): Finding {
	const { rows, driver, reference, cleanMetrics } = input;
	const shares = [...byRow]
		.map((costS, row) => ({ corner: rows[row].corner, costS }))
		.filter(({ costS }) => Math.abs(costS) >= LEAST_SHARE_S);
	const costS = shares.reduce((sum, share) => sum + share.costS, 0);
	const of = (metrics: readonly CornerMetrics[]) => metrics.find((m) => m.corner === corner);
	const pair = {
		driver: of(driver.metrics),
		reference: of(reference.metrics),
		apexM: 0,
		lengthM: reference.grid.lengthM
	};
	const habit = judgeHabit(
		cause.field,
		costS,
		pair.driver,
		pair.reference,
		cleanMetrics.filter((m) => m.corner === corner),
		pair.lengthM
	);
	const difference = cause.field === null ? null : differenceOf(pair, cause.field);
	const uncertain = difference ? Math.min(difference.plusMinus / Math.abs(difference.by || 1), 1) : null;
	return {
		corner,
		code: cause.code,
		costS,
		plusMinusS: uncertain === null || costS === 0 ? null : Math.hypot(Math.abs(costS) * uncertain, DELTA_PLUS_MINUS_S),
		habit: habit.habit,
		habitLaps: habit.laps,
		shares,
		evidence: cause.evidence,
		text: findingText(cause),
		ownLap: cause.field === null || costS < 0 ? null : alreadyDone(cause.field, pair, cleanMetrics, corner)
	};
}

/** The driver's own clean lap that was quickest in the corner among those that show no such difference from the reference. */
function alreadyDone(
	field: MetricField,
	pair: MetricsPair,
	cleanMetrics: readonly CornerMetrics[],
	corner: number
): number | null {
	const own = differenceOf(pair, field);
	if (!own) return null;
	const done = cleanMetrics.filter((m) => {
		if (m.corner !== corner || m.lap === pair.driver?.lap) return false;
		const other = differenceOf({ ...pair, driver: m }, field);
		return other !== null && (!other.counts || Math.sign(other.by) !== Math.sign(own.by));
	});
	const quickest = done.reduce<CornerMetrics | null>(
		(best, m) => (best && (best.timeS ?? Infinity) <= (m.timeS ?? Infinity) ? best : m),
		null
	);
	return quickest?.lap ?? null;
}

/** What each corner's row carries of causes elsewhere; repeats shares, so that sums leave it out. */
function carriedIn(findings: readonly Finding[], rows: readonly LedgerRow[]): Finding[] {
	const found: Finding[] = [];
	for (const row of rows.slice(1)) {
		const bySource = new Map<number, number>();
		for (const { corner, shares } of findings) {
			if (corner === row.corner) continue;
			const share = shares.find((one) => one.corner === row.corner)?.costS ?? 0;
			bySource.set(corner, (bySource.get(corner) ?? 0) + share);
		}
		for (const [source, costS] of bySource) {
			if (Math.abs(costS) < LEAST_CARRIED_S) continue;
			const cause: Cause = {
				code: 'carried_in',
				field: null,
				evidence: [
					{
						quantity: 'fromCorner',
						unit: '',
						driver: source,
						reference: null,
						atM: row.entryM,
						plusMinus: null
					}
				]
			};
			found.push({
				corner: row.corner,
				code: cause.code,
				costS,
				plusMinusS: null,
				habit: null,
				habitLaps: null,
				shares: [],
				evidence: cause.evidence,
				text: findingText(cause)
			});
		}
	}
	return found;
}
