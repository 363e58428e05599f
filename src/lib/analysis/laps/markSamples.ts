import type { Channels } from '../model.ts';

/** Two crossings are never closer than this: the shortest kart circuits take over 15 s. */
const LEAST_LAP_S = 6;
/** A change of the lap column that is taken back within this time is a glitch. */
const GLITCH_S = 1;
/** Distance that a lap distance falls by when it restarts, at least. */
const LEAST_RESTART_M = 100;
/** Time that a running lap time falls by when it restarts, at least, s. */
const LEAST_RESTART_S = 5;

/**
 * First samples behind each change of the lap column.
 *
 * @returns sample indices, increasing; empty where the column is constant
 */
export function lapColumnChanges({ lapColumn, timeS }: Channels): number[] {
	if (!lapColumn) return [];
	const marks: number[] = [];
	let value = NaN;
	for (let i = 0; i < lapColumn.length; i++) {
		const now = lapColumn[i];
		if (Number.isNaN(now) || now === value) continue;
		if (Number.isNaN(value)) {
			value = now;
			continue;
		}
		let j = i;
		while (j < lapColumn.length && timeS[j] < timeS[i] + GLITCH_S && !(lapColumn[j] === value)) j++;
		if (j < lapColumn.length && lapColumn[j] === value && timeS[j] < timeS[i] + GLITCH_S) continue;
		marks.push(i);
		value = now;
	}
	return apart(marks, timeS);
}

/** First samples of each beacon pulse, or behind each step of a beacon counter. */
export function beaconPulses({ beacon, timeS }: Channels): number[] {
	if (!beacon) return [];
	const marks: number[] = [];
	let value = NaN;
	for (let i = 0; i < beacon.length; i++) {
		const now = beacon[i];
		if (Number.isNaN(now)) continue;
		if (now > value) marks.push(i);
		value = now;
	}
	return apart(marks, timeS);
}

/**
 * First samples behind each restart of the lap distance. A car that rolls back over the line takes its crossing back.
 */
export function lapDistanceRestarts({ lapDistanceM, timeS }: Channels): number[] {
	if (!lapDistanceM) return [];
	let longest = 0;
	for (let i = 0; i < lapDistanceM.length; i++) if (lapDistanceM[i] > longest) longest = lapDistanceM[i];
	const fall = Math.max(LEAST_RESTART_M, longest / 2);
	const marks: number[] = [];
	let value = NaN;
	for (let i = 0; i < lapDistanceM.length; i++) {
		const now = lapDistanceM[i];
		if (Number.isNaN(now)) continue;
		if (value - now > fall) marks.push(i);
		else if (now - value > fall && marks.length > 0 && timeS[i] - timeS[marks[marks.length - 1]] < LEAST_LAP_S)
			marks.pop();
		value = now;
	}
	return apart(marks, timeS);
}

/** First samples behind each restart of the running lap time. */
export function lapTimeRestarts({ lapTimeColumnS, timeS }: Channels): number[] {
	if (!lapTimeColumnS) return [];
	const marks: number[] = [];
	let value = NaN;
	for (let i = 0; i < lapTimeColumnS.length; i++) {
		const now = lapTimeColumnS[i];
		if (Number.isNaN(now)) continue;
		if (value - now > LEAST_RESTART_S && now < value / 2) marks.push(i);
		value = now;
	}
	return apart(marks, timeS);
}

function apart(marks: number[], timeS: Float64Array): number[] {
	const kept: number[] = [];
	for (const i of marks) if (kept.length === 0 || timeS[i] - timeS[kept[kept.length - 1]] >= LEAST_LAP_S) kept.push(i);
	return kept;
}
