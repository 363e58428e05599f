import type { LapReason } from '../../schemas/codes.ts';
import type { Lap, PlacedRun } from '../model.ts';
import { median, quantile } from '../stats/quantile.ts';
import { sampleBefore, timeAtPlace } from '../trace/placeTime.ts';
import { COARSE_S } from './listLaps.ts';

/** A lap covers at least this share of the path. */
const LEAST_LENGTH_SHARE = 0.99;
/** Without positions the length is the driven one, which a tighter line shortens by a percent or two. */
const LEAST_DRIVEN_SHARE = 0.97;
const LONGEST_GAP_S = 0.5;
const STOP_KMH = 3.6;
const LONGEST_STOP_S = 0.5;
const OFF_PATH_M = 10;
const LONGEST_OFF_S = 1;
/** Times beyond this share of the lower quartile are slow: the 107 % rule. */
const SLOW_SHARE = 1.07;
/** A standing start: crossed slower than this share of the usual speed, having stood this long before at most. */
const START_SPEED_SHARE = 0.7;
const STOOD_BEFORE_S = 30;
/** A slow phase: this much slower than usual at the same places, for this long. */
const NEUTRALISED_RATIO = 1.35;
const NEUTRALISED_S = 8;
const NEUTRALISED_SHARE = 0.1;
const NEUTRALISED_BINS = 60;

/**
 * Says which laps are clean, and why the others are not: clean is timed, at least 99 % of the path's length, no drop-out over 0.5 s,
 * no stop, never over 10 m off the path for 1 s, not neutralised, not from a standing start or through the pits, and a time of at
 * most 107 % of the lower quartile of the run's timed laps.
 *
 * @param placed the run with its laps as listed
 * @returns the laps with `clean` and `reasons`; the input is not modified
 */
export function judgeLaps(placed: PlacedRun): Lap[] {
	const timed = placed.laps.filter((lap) => lap.kind === 'timed');
	const quartileS = quantile(
		timed.map((lap) => lap.endS - lap.startS),
		0.25
	);
	const slowPhases = neutralisedLaps(placed, timed);
	const { channels, path } = placed;
	const speedAt = (atS: number) => channels.speedKmh[Math.max(sampleBefore(channels.timeS, atS), 0)];
	const usualKmh = median(timed.map((lap) => speedAt(lap.startS)));
	return placed.laps.map((lap) => {
		const reasons: LapReason[] = [];
		if (lap.kind === 'out') reasons.push('out_lap');
		if (lap.kind === 'in') reasons.push('in_lap');
		if (lap.kind === 'partial') reasons.push('partial');
		if (lap.turn !== null) reasons.push(...seen(placed, lap));
		if (lap.kind === 'timed') {
			const stopped = reasons.includes('stopped');
			if (!stopped && speedAt(lap.startS) < START_SPEED_SHARE * usualKmh && stoodBefore(placed, lap.startS))
				reasons.push('standing_start');
			const share = (lap.lengthM ?? NaN) / path.lengthM;
			if (!placed.offsetM && share < LEAST_DRIVEN_SHARE) reasons.push('short');
			if (!stopped && slowPhases.has(lap)) reasons.push('neutralised');
			if (lap.endS - lap.startS > SLOW_SHARE * quartileS) reasons.push('slow');
		}
		const clean = lap.kind === 'timed' && reasons.length === 0;
		if (lap.plusMinusS > COARSE_S) reasons.push('time_coarse');
		return { ...lap, clean, reasons };
	});
}

/** What the samples of a lap show. */
function seen({ channels, offsetM, placeM, path }: PlacedRun, lap: Lap): LapReason[] {
	const { timeS, speedKmh, xM } = channels;
	const from = Math.max(sampleBefore(timeS, lap.startS), 0);
	const to = Math.min(sampleBefore(timeS, lap.endS) + 1, timeS.length - 1);
	const stop = new Longest();
	const off = new Longest();
	const gap = new Longest();
	const lost = new Longest();
	for (let i = from + 1; i <= to; i++) {
		const step = timeS[i] - timeS[i - 1];
		stop.add(speedKmh[i] < STOP_KMH && speedKmh[i - 1] < STOP_KMH, step);
		gap.add(step > LONGEST_GAP_S || Number.isNaN(speedKmh[i]), step);
		if (!offsetM) continue;
		off.add(Math.abs(offsetM[i]) > OFF_PATH_M, step);
		lost.add(Number.isNaN(offsetM[i]) || (xM !== null && Number.isNaN(xM[i])), step);
	}
	const reasons: LapReason[] = [];
	if (stop.longestS >= LONGEST_STOP_S) reasons.push('stopped');
	if (gap.longestS > LONGEST_GAP_S || lost.longestS > LONGEST_GAP_S) reasons.push('drop_out');
	if (off.longestS >= LONGEST_OFF_S) reasons.push('off_path');
	if (lap.turn !== null && placeM[to] - placeM[from] < LEAST_LENGTH_SHARE * path.lengthM) reasons.push('short');
	return reasons;
}

/** Longest time in a row for which something holds. */
class Longest {
	longestS = 0;
	#runS = 0;

	add(holds: boolean, stepS: number): void {
		this.#runS = holds ? this.#runS + stepS : 0;
		if (this.#runS > this.longestS) this.longestS = this.#runS;
	}
}

function stoodBefore({ channels }: PlacedRun, atS: number): boolean {
	const { timeS, speedKmh } = channels;
	for (let i = sampleBefore(timeS, atS); i >= 0 && timeS[i] >= atS - STOOD_BEFORE_S; i--) {
		if (speedKmh[i] < STOP_KMH) return true;
	}
	return false;
}

/** Laps with a slow phase: a stretch driven much slower than the run's laps usually drive it. */
function neutralisedLaps(placed: PlacedRun, timed: Lap[]): Set<Lap> {
	const found = new Set<Lap>();
	if (timed.length < 3) return found;
	const times = timed.map((lap) => {
		const start = (lap.turn ?? 0) * placed.path.lengthM;
		const at = Array.from({ length: NEUTRALISED_BINS + 1 }, (_, b) =>
			timeAtPlace(placed, start + (b / NEUTRALISED_BINS) * placed.path.lengthM)
		);
		return at.slice(1).map((t, b) => t - at[b]);
	});
	const usual = Array.from({ length: NEUTRALISED_BINS }, (_, b) => median(times.map((bins) => bins[b])));
	timed.forEach((lap, k) => {
		const phase = new Longest();
		times[k].forEach((binS, b) => phase.add(binS > NEUTRALISED_RATIO * usual[b], binS));
		const lapS = lap.endS - lap.startS;
		if (phase.longestS >= Math.max(NEUTRALISED_S, NEUTRALISED_SHARE * lapS)) found.add(lap);
	});
	return found;
}
