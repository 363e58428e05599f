import type { Warning } from '../../schemas/analysisDocument.ts';
import type { RawRun } from '../../parse/rawRun.ts';
import { fillSmooth } from './fillGaps.ts';
import { middleOf, toLocalMetres } from './localFrame.ts';
import type { LocalFrame } from './localFrame.ts';

export interface Positions {
	xM: Float64Array;
	yM: Float64Array;
	/** null where the file has x and y */
	origin: LocalFrame | null;
	warnings: Warning[];
}

/** Longest gap in positions that a smooth curve bridges: a receiver at 1 Hz is still drawn, a tunnel is not. */
const MAX_BRIDGE_S = 1.2;
/** No car covers more in a second; two positions further apart are a jump of the receiver. */
const MAX_SPEED_MPS = 140;
/** A car that moves faster than this cannot stand on one position for two samples. */
const MOVING_KMH = 15;

/**
 * Positions in local metres: latitude and longitude on a plane about the run's middle, or x and y as they are. Zeros, values out of
 * range, samples that only repeat the last one while the car moves, and jumps are no positions; short gaps are bridged.
 *
 * @returns null where the run has none
 */
export function preparePositions(raw: RawRun): Positions | null {
	const { latitude, longitude, positionX, positionY, speed } = raw.columns;
	const { timeS } = raw;
	const geographic = latitude !== undefined && longitude !== undefined;
	const [first, second] = geographic ? [latitude, longitude] : [positionX, positionY];
	if (!first || !second) return null;
	const [a, b] = [new Float64Array(first), new Float64Array(second)];
	let missing = 0;
	let firstMissing = -1;
	let [heldA, heldB] = [NaN, NaN];
	for (let i = 0; i < a.length; i++) {
		const nothing =
			!Number.isFinite(a[i]) ||
			!Number.isFinite(b[i]) ||
			(a[i] === 0 && b[i] === 0) ||
			(geographic && (Math.abs(a[i]) > 90 || Math.abs(b[i]) > 180));
		if (nothing) {
			missing++;
			if (firstMissing < 0) firstMissing = i;
		}
		const held = !nothing && a[i] === heldA && b[i] === heldB && speed !== undefined && speed[i] > MOVING_KMH;
		if (!nothing) [heldA, heldB] = [a[i], b[i]];
		if (nothing || held) a[i] = b[i] = NaN;
	}
	if (missing > 0.9 * a.length && !isSparse(a)) return null;
	const origin = geographic ? middleOf(a, b) : null;
	if (geographic && !origin) return null;
	const { xM, yM } = origin ? toLocalMetres(a, b, origin) : { xM: a, yM: b };
	const warnings: Warning[] = [];
	const jumps = removeJumps(xM, yM, timeS);
	if (jumps.count > 0) {
		warnings.push({
			code: 'position_jump',
			message: `${jumps.count} positions jump further than a car can go and were left out`,
			row: raw.fileRow[jumps.first]
		});
	}
	fillSmooth(xM, timeS, MAX_BRIDGE_S);
	fillSmooth(yM, timeS, MAX_BRIDGE_S);
	let open = 0;
	for (const value of xM) if (Number.isNaN(value)) open++;
	if (open > 0 && firstMissing >= 0) {
		warnings.push({
			code: 'positions_missing',
			message: `${open} of ${a.length} samples have no position`,
			row: raw.fileRow[firstMissing]
		});
	}
	return { xM, yM, origin, warnings };
}

/** Missing cells that come at a steady beat are a slower receiver, not a fault. */
function isSparse(values: Float64Array): boolean {
	let known = 0;
	for (const value of values) if (!Number.isNaN(value)) known++;
	return known >= 20;
}

/** Takes out positions that cannot be reached from the last good one; where the next ones agree with them, they are kept. */
function removeJumps(xM: Float64Array, yM: Float64Array, timeS: Float64Array): { count: number; first: number } {
	let good = -1;
	let count = 0;
	let first = -1;
	let rejected = 0;
	for (let i = 0; i < xM.length; i++) {
		if (Number.isNaN(xM[i])) continue;
		if (good >= 0) {
			const way = Math.hypot(xM[i] - xM[good], yM[i] - yM[good]);
			const limit = MAX_SPEED_MPS * (timeS[i] - timeS[good]) + 3;
			// After many rejections in a row it is the old position that was wrong.
			if (way > limit && rejected < 20) {
				xM[i] = yM[i] = NaN;
				count++;
				rejected++;
				if (first < 0) first = i;
				continue;
			}
		}
		good = i;
		rejected = 0;
	}
	return { count, first };
}
