import { smoothClosed, type CentreLine } from '../../demo/centreLine.ts';
import type { LapGrid } from '../../analysis/model.ts';
import { metricsSchema, type CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { ExampleLine } from './exampleLine.ts';
import { KMH_PER_MPS } from '../../units.ts';

/** How one corner is driven in an example lap; zeros and ones are the reference's way. */
export interface CornerStyle {
	/** m, begins to brake earlier by this */
	earlyM: number;
	/** pedal over what the deceleration needs */
	overPedal: number;
	/** share of the reference's minimum speed */
	minShare: number;
	/** m, picks the throttle up later by this */
	pickUpLaterM: number;
}
export const REFERENCE_STYLE: CornerStyle = { earlyM: 0, overPedal: 1, minShare: 1, pickUpLaterM: 0 };

export interface ExampleLap {
	grid: LapGrid;
	metrics: CornerMetrics[];
}

const MARGIN_M = 250;
const DECELERATION_MPS2 = 9.6;
const PEDAL_PCT_PER_MPS2 = 7.4;
const LATERAL_MPS2 = 13;

/**
 * One smooth lap on a centre line, made by closed forms: each corner asks for a minimum speed, the brake reaches it with a
 * straight release, the throttle leaves it with a straight ramp. Periodic, so that the margins carry on.
 *
 * @param styles one per corner of the road
 */
export function exampleLap(road: CentreLine, line: ExampleLine, lapNumber: number, styles: CornerStyle[]): ExampleLap {
	const n = road.lengthM;
	const wrap = (s: number): number => ((Math.round(s) % n) + n) % n;
	const speed = new Float64Array(n);
	const brake = new Float64Array(n);
	const throttle = new Float64Array(n).fill(100);
	const plans = road.corners.map((corner, i) => {
		const lowest = Math.sqrt(LATERAL_MPS2 * corner.radiusM * 1.08) * styles[i].minShare;
		const gap = corner.apexM - road.corners[(i + road.corners.length - 1) % road.corners.length].endM;
		return {
			corner,
			style: styles[i],
			lowest,
			slowestM: corner.apexM - 2,
			trailM: Math.min(52, ((gap + n) % n) * 0.5)
		};
	});
	const pull = (v: number): number => Math.min(6.1, 300 / v) - 0.0007 * v * v;

	// Squared speed that still allows a corner's minimum, x metres before its slowest place.
	const allowed = (lowest: number, trail: number, deceleration: number, x: number): number =>
		lowest * lowest + 2 * deceleration * (x < trail ? (x * x) / (2 * trail) : x - trail / 2);

	let v = plans[plans.length - 1].lowest;
	for (let turn = 0; turn < 2; turn++) {
		plans.forEach((plan, i) => {
			const before = plans[(i + plans.length - 1) % plans.length];
			const from = before.slowestM - (i === 0 ? n : 0);
			const pickUp = before.corner.apexM + 4 + before.style.pickUpLaterM - (i === 0 ? n : 0);
			const deceleration = (onset: number | null): number =>
				onset === null || plan.style.earlyM === 0
					? DECELERATION_MPS2
					: (DECELERATION_MPS2 * (plan.slowestM - onset)) / (plan.slowestM - onset + plan.style.earlyM * 1.25);
			let onset: number | null = null;
			const run = (a: number, write: boolean): void => {
				v = before.lowest;
				for (let s = Math.ceil(from); s < plan.slowestM; s++) {
					const x = plan.slowestM - s;
					const limit = allowed(plan.lowest, plan.trailM, a, x);
					const opening = s < pickUp ? 0 : Math.min(1, 0.12 + (0.88 * (s - pickUp)) / 34);
					const free = v * v + 2 * (s < pickUp ? -0.3 : pull(v) * opening);
					const braking = free > limit;
					if (braking) onset ??= s;
					v = Math.sqrt(Math.max(plan.lowest * plan.lowest, Math.min(free, limit)));
					if (!write) continue;
					const k = wrap(s);
					speed[k] = v;
					throttle[k] = braking ? 0 : s < pickUp ? 0 : 100 * opening;
					brake[k] = braking
						? Math.min(100, a * Math.min(1, x / plan.trailM) * PEDAL_PCT_PER_MPS2 * plan.style.overPedal)
						: 0;
				}
			};
			run(DECELERATION_MPS2, false);
			const a = deceleration(onset);
			onset = null;
			run(a, true);
		});
	}
	const speedKmh = smoothClosed(speed, 2.5).map((value) => value * KMH_PER_MPS);
	const brakePct = smoothClosed(brake, 1.6).map((value) => (value < 0.4 ? 0 : value));
	const throttlePct = smoothClosed(throttle, 1.6);
	const steeringDeg = smoothClosed(line.curvaturePerM, 3).map((curvature) => curvature * 1900);

	const size = n + 1 + 2 * MARGIN_M;
	const onGrid = (values: Float64Array): Float64Array =>
		Float64Array.from({ length: size }, (_, i) => values[wrap(i - MARGIN_M)]);
	const timeS = new Float64Array(size);
	for (let i = 1; i < size; i++) {
		const mean = (speedKmh[wrap(i - 1 - MARGIN_M)] + speedKmh[wrap(i - MARGIN_M)]) / 2 / KMH_PER_MPS;
		timeS[i] = timeS[i - 1] + 1 / mean;
	}
	const crossing = timeS[MARGIN_M];
	const grid: LapGrid = {
		lapNumber,
		lengthM: n,
		marginM: MARGIN_M,
		lapTimeS: timeS[MARGIN_M + n] - crossing,
		timeS: timeS.map((t) => t - crossing),
		speedKmh: onGrid(speedKmh),
		brakePct: onGrid(brakePct),
		throttlePct: onGrid(throttlePct),
		steeringDeg: onGrid(steeringDeg),
		offsetM: onGrid(line.offsetM),
		curvaturePerM: onGrid(line.curvaturePerM),
		accLongMps2: null,
		gear: null,
		engineSpeedRpm: null
	};
	const metrics = plans.map(({ corner }, i) => measure(grid, lapNumber, i + 1, corner));
	return { grid, metrics };
}

/** Places and levels of one corner, read off the grid: good enough for an example, never for a run. */
function measure(grid: LapGrid, lap: number, number: number, corner: CentreLine['corners'][number]): CornerMetrics {
	const at = (values: Float64Array | null, s: number): number => values?.[Math.round(s) + grid.marginM] ?? NaN;
	const first = (from: number, to: number, test: (s: number) => boolean): number | null => {
		for (let s = Math.round(from); s <= to; s++) if (test(s)) return s;
		return null;
	};
	const from = Math.max(-grid.marginM + 1, corner.apexM - 230);
	let onset = first(corner.apexM - 1, corner.apexM - 1, () => false);
	for (let s = Math.round(corner.apexM); s > from; s--) {
		if (at(grid.brakePct, s) >= 5) onset = s;
		else if (onset !== null) break;
	}
	let slowest = Math.round(corner.startM);
	for (let s = slowest; s <= corner.endM; s++) if (at(grid.speedKmh, s) < at(grid.speedKmh, slowest)) slowest = s;
	let peak = -1;
	let peakM: number | null = null;
	if (onset !== null)
		for (let s = onset; s <= corner.apexM + 10; s++)
			if (at(grid.brakePct, s) > peak) [peak, peakM] = [at(grid.brakePct, s), s];
	const off = onset === null ? null : first(onset + 5, corner.endM + 60, (s) => at(grid.brakePct, s) < 2);
	const lifted = onset !== null || at(grid.throttlePct, slowest) < 95;
	const pickUp = lifted ? first(slowest - 5, corner.endM + 80, (s) => at(grid.throttlePct, s) >= 5) : null;
	const onLap = (placeM: number | null): number | null =>
		placeM === null ? null : ((placeM % grid.lengthM) + grid.lengthM) % grid.lengthM;
	// Every other field of a metric is "not known here".
	const unknown = Object.fromEntries(Object.keys(metricsSchema.shape).map((key) => [key, null]));
	return metricsSchema.parse({
		...unknown,
		lap,
		corner: number,
		onsetM: onLap(onset),
		onsetS: onset === null ? null : at(grid.timeS, onset),
		peakPct: onset === null ? null : peak,
		peakRawPct: onset === null ? null : peak,
		peakM: onLap(peakM),
		releaseStartM: off === null ? null : onLap(off - 50),
		releaseEndM: onLap(off),
		turnInM: onLap(corner.startM - 5),
		entryKmh: at(grid.speedKmh, corner.startM),
		minKmh: at(grid.speedKmh, slowest),
		minSpeedM: onLap(slowest),
		liftM: onset === null ? null : onLap(onset - 5),
		pickUpM: onLap(pickUp),
		fullThrottleM:
			pickUp === null ? null : onLap(first(pickUp, corner.endM + 140, (s) => at(grid.throttlePct, s) >= 95)),
		exitKmh: at(grid.speedKmh, corner.endM),
		plusMinus: {},
		reasons: {}
	});
}
