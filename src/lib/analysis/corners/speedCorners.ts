import type { FoundCorner } from './findCorners.ts';
import { pedalUse } from './pedalUse.ts';
import type { ReferenceTrace } from './referenceTrace.ts';

/** A minimum is a corner when the speed rises by this on both sides, m/s and as a share of the lap's highest. */
const LEAST_RISE_MPS = 1.2;
const LEAST_RISE_SHARE = 0.04;
/** A corner begins and ends where the speed is this share of its fall and of its rise above the minimum. */
const FLANK_SHARE = 0.25;
/** Speeds this near to the minimum are its floor, m/s. */
const FLOOR_MPS = 0.4;
/** Fall and rise are looked for this far from the minimum, m. */
const REACH_M = 600;
const APPROACH_M = 250;

/**
 * Corners of a path without a shape: the minima of speed. A corner reaches from the last quarter of the fall before to the first
 * quarter of the rise behind; its direction, radius and angle are not known.
 */
export function speedCorners(trace: ReferenceTrace): FoundCorner[] {
	const { speedMps, size } = trace;
	let top = 0;
	for (const speed of speedMps) if (speed > top) top = speed;
	const rise = Math.max(LEAST_RISE_MPS, LEAST_RISE_SHARE * top);
	const found: FoundCorner[] = [];
	for (let i = 1; i + 1 < size; i++) {
		if (!(speedMps[i] < speedMps[i - 1] && speedMps[i] <= speedMps[i + 1])) continue;
		const before = highestBeside(speedMps, i, -1);
		const behind = highestBeside(speedMps, i, 1);
		if (before - speedMps[i] < rise || behind - speedMps[i] < rise) continue;
		const startM = flank(speedMps, i, -1, speedMps[i] + FLANK_SHARE * (before - speedMps[i]));
		const endM = flank(speedMps, i, 1, speedMps[i] + FLANK_SHARE * (behind - speedMps[i]));
		const floor = speedMps[i] + FLOOR_MPS;
		const apexM = (flank(speedMps, i, -1, floor) + flank(speedMps, i, 1, floor)) / 2;
		const use = pedalUse(trace, startM - APPROACH_M, apexM);
		found.push({
			startM,
			apexM,
			apex2M: null,
			endM,
			direction: null,
			minRadiusM: null,
			angleDeg: null,
			kind: use.braked ? 'braked' : use.lifted ? 'lifted' : use.known ? 'flat' : null,
			isCorner: true
		});
	}
	return found;
}

/** Highest speed on one side before it falls below the minimum. */
function highestBeside(speed: Float64Array, at: number, direction: 1 | -1): number {
	let top = speed[at];
	for (let i = at; i >= 0 && i < speed.length && Math.abs(i - at) <= REACH_M; i += direction) {
		if (speed[i] < speed[at]) break;
		if (speed[i] > top) top = speed[i];
	}
	return top;
}

/** Place on one side where the speed first exceeds a level. */
function flank(speed: Float64Array, at: number, direction: 1 | -1, level: number): number {
	let i = at;
	while (i + direction >= 0 && i + direction < speed.length && speed[i + direction] <= level) i += direction;
	const next = i + direction;
	if (next < 0 || next >= speed.length) return i;
	return i + (direction * (level - speed[i])) / (speed[next] - speed[i]);
}
