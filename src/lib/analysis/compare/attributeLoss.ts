import type { LedgerRow } from '../../schemas/analysisDocument.ts';
import { KMH_PER_MPS } from '../../units.ts';
import { fullThrottleAcceleration, type FullThrottleModel } from '../car/fullThrottle.ts';
import { GapPools } from './gapPools.ts';
import type { SpeedGap } from './speedGap.ts';
import { CARRIED_IN, poolOf, REST, type StagePlan } from './stages.ts';

/** A gap below this is none: 1 mm/s at 50 m/s. */
const NO_DEFICIT = 0.05;
/** On a straight the gap may drift by this share, or by this speed, before the car, a tow or the wind is held responsible. */
const DRIFT_SHARE = 0.3;
const DRIFT_MPS = 1 / KMH_PER_MPS;
/** Elsewhere this much is the jitter of places and speeds. */
const JITTER_SHARE = 0.02;
/** Share of the model's own scatter that the mean over a whole straight may be off by. */
const SCATTER_SHARE = 0.3;

/** s lost (negative: found) by pool, one entry for each ledger row. */
export type LossTable = ReadonlyMap<number, Float64Array>;

/**
 * Shares the time lost along the lap out among the stages that caused it.
 *
 * The speed gap at each metre is the sum of what each stage has added so far. Where the gap grows, the stage at that place is
 * charged with the growth; where it shrinks (the reference slows down for a corner that the driver has slowed down for already),
 * all shares shrink alike. What an early braking leaves at the lowest speed is a low minimum speed from there on. The time lost in a metre follows the shares, so that a cause pays for what it carries down the next
 * straight, and all shares sum to Δ. At full throttle the gap follows from the car's own acceleration by speed; what differs
 * from that beyond the model's scatter is charged to the straight.
 *
 * @param plan  stage of every metre of the gap
 * @param rows  ledger, whose borders the loss is cut at
 * @param model the driver's car at full throttle, or null
 */
export function attributeLoss(
	gap: SpeedGap,
	plan: StagePlan,
	rows: readonly LedgerRow[],
	model: FullThrottleModel | null
): LossTable {
	const { deficit, lossPerDeficit, fromM } = gap;
	const table = new Map<number, Float64Array>();
	const pools = new GapPools(plan.pools);
	const before = new Float64Array(plan.pools);
	pools.change(Number.isFinite(deficit[0]) ? deficit[0] : 0, CARRIED_IN);
	let byModel = false;
	let row = 0;
	for (let i = 0; i + 1 < deficit.length; i++) {
		const { loss, gain, straight } = plan;
		if (i > 0 && (loss[i] !== loss[i - 1] || gain[i] !== gain[i - 1])) {
			if (straight[i - 1]) pools.cancel();
			pools.settle();
		}
		const slowest = plan.slowest.get(i);
		if (slowest !== undefined) {
			for (const kind of ['coastBefore', 'approach'] as const)
				pools.move(poolOf(slowest, kind), poolOf(slowest, 'rolling'));
			pools.settle();
		}
		if (straight[i] && !straight[i - 1]) byModel = model !== null && departsFromModel(gap, plan, i, model);

		for (const pool of pools.active) before[pool] = pools.parts[pool];
		const next = Number.isFinite(deficit[i + 1]) ? deficit[i + 1] : pools.gap;
		if (straight[i] && byModel && model) {
			const own = Math.abs(pools.gap) > NO_DEFICIT ? 1 + ownGrowth(gap, i, model) / pools.gap : 1;
			pools.evolve(next, Math.min(Math.max(own, 0), 2), loss[i]);
		} else if (straight[i]) pools.change(next, REST, 1 + DRIFT_SHARE);
		else pools.change(next, next > 0 ? loss[i] : gain[i], 1 + JITTER_SHARE);

		const atM = fromM + i;
		if (atM < 0 || !Number.isFinite(lossPerDeficit[i] + lossPerDeficit[i + 1])) continue;
		while (row < rows.length - 1 && rows[row].endM <= atM) row++;
		for (const pool of pools.active) {
			const start = before[pool] * lossPerDeficit[i];
			const end = pools.parts[pool] * lossPerDeficit[i + 1];
			before[pool] = 0;
			if (start !== 0 || end !== 0) charge(table, pool, rows, row, atM, (start + end) / 2);
		}
	}
	return table;
}

/** Writes the loss of one metre to the rows that the metre lies in. */
function charge(
	table: Map<number, Float64Array>,
	pool: number,
	rows: readonly LedgerRow[],
	firstRow: number,
	atM: number,
	lossS: number
): void {
	let byRow = table.get(pool);
	if (!byRow) table.set(pool, (byRow = new Float64Array(rows.length)));
	for (let row = firstRow, fromM = atM; row < rows.length && fromM < atM + 1; row++) {
		const toM = Math.min(rows[row].endM, atM + 1);
		if (toM <= fromM) continue;
		byRow[row] += lossS * (toM - fromM);
		fromM = toM;
	}
}

/** Growth of the gap over one metre that both speeds alone explain: the slower car accelerates harder. m²/s² */
function ownGrowth(gap: SpeedGap, i: number, model: FullThrottleModel): number {
	const reference = fullThrottleAcceleration(model, gap.referenceMps[i] * KMH_PER_MPS);
	return reference - fullThrottleAcceleration(model, gap.driverMps[i] * KMH_PER_MPS);
}

/** Does the gap over the straight that begins at `from` differ from what both speeds alone explain, beyond scatter? */
function departsFromModel(gap: SpeedGap, plan: StagePlan, from: number, model: FullThrottleModel): boolean {
	const { deficit, driverMps } = gap;
	let expected = 0;
	let to = from;
	while (to + 1 < deficit.length && plan.straight[to] && plan.owner[to] === plan.owner[from]) {
		expected += ownGrowth(gap, to, model);
		to++;
	}
	const own = deficit[from] + expected;
	const scatter = DRIFT_MPS * driverMps[to] + SCATTER_SHARE * model.residualMps2 * (to - from);
	const allowed = Math.max(DRIFT_SHARE * Math.abs(deficit[from]), scatter);
	// closing up faster than the model has it may be a limiter or the model; no cause is charged with more than was lost
	const closesUp = deficit[to] * own >= 0 ? Math.abs(deficit[to]) <= Math.abs(own) : Math.abs(deficit[to]) <= scatter;
	return !closesUp && Math.abs(deficit[to] - own) > allowed;
}
