import type { Corner, CornerMetrics, LockUp } from '../../schemas/analysisDocument.ts';
import type { PlacedRun } from '../model.ts';
import { placeAtTime } from '../trace/placeTime.ts';
import type { CornerPassage } from './cornerPassages.ts';
import { lockUps, type WheelLock } from './lockUps.ts';
import { measureCorner } from './measureCorner.ts';
import { prepareRun, type MeasuredRun } from './measuredRun.ts';
import { WHEELS } from './wheelFit.ts';

/**
 * Every metric of every timed lap and numbered corner of a run, and its lock-ups.
 *
 * A lock-up belongs to the first corner that ends behind the place where it begins: the one that is braked for, or being driven. `lockUps`
 * of a corner counts moments, so that two wheels which lock together count once.
 *
 * @param placed  the run on its path
 * @param corners the corner map
 * @returns metrics in the order of driving; lock-ups, one per wheel, in order of time
 */
export function measureRun(placed: PlacedRun, corners: Corner[]): { metrics: CornerMetrics[]; lockUps: LockUp[] } {
	const run = prepareRun(placed, corners);
	const byPassage = new Map<CornerPassage, WheelLock[]>();
	const locks = lockUps(placed.channels, placed.curvaturePerM).map((lock): LockUp => {
		const passage = passageOf(run, lock);
		if (passage) byPassage.set(passage, [...(byPassage.get(passage) ?? []), lock]);
		const lap = passage?.lap ?? placed.laps.find((one) => lock.startS >= one.startS && lock.startS < one.endS);
		return { ...lock, lap: lap?.number ?? null, corner: passage?.corner.number ?? null };
	});
	const metrics: CornerMetrics[] = [];
	run.passages.forEach((passage, index) => {
		if (!passage.lap) return;
		const measured = measureCorner(run, index);
		fillLocks(measured, placed, byPassage.get(passage) ?? []);
		metrics.push(measured);
	});
	return { metrics, lockUps: locks };
}

function passageOf({ passages, placed }: MeasuredRun, { startS }: WheelLock): CornerPassage | undefined {
	const placeM = placeAtTime(placed, startS);
	return passages.find(({ endM }) => endM > placeM);
}

function fillLocks(measured: CornerMetrics, { channels }: PlacedRun, locks: WheelLock[]): void {
	if (!channels.wheelKmh) {
		for (const field of ['lockUps', 'rearLocks', 'lockWheels'] as const) measured.reasons[field] = 'no_channel';
		return;
	}
	measured.lockUps = countMoments(locks);
	const wheels = WHEELS.filter((wheel) => locks.some((lock) => lock.wheel === wheel));
	measured.lockWheels = wheels.length ? wheels.join(' ') : null;
	if (channels.gear) measured.rearLocks = countMoments(locks.filter((lock) => lock.atDownshift));
	else measured.reasons.rearLocks = 'no_channel';
}

/** Locks of several wheels that overlap in time are one moment. */
function countMoments(locks: WheelLock[]): number {
	let moments = 0;
	let untilS = -Infinity;
	for (const { startS, endS } of [...locks].sort((a, b) => a.startS - b.startS)) {
		if (startS > untilS) moments++;
		untilS = Math.max(untilS, endS);
	}
	return moments;
}
