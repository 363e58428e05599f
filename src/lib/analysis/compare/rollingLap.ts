import type { Lap, PlacedRun } from '../model.ts';
import { timeAtPlace } from '../trace/placeTime.ts';

/** The least time over one full length, from any place. */
export interface RollingLap {
	timeS: number;
	/** place from which it counts, m from start/finish */
	startM: number;
	/** number of the lap in which it begins */
	lap: number;
}

/** Places are tried this far apart; between them the time hardly changes. */
const STEP_M = 10;

/**
 * Best rolling lap: the least time over one full length of a closed path, from any start point, within clean laps that follow one another.
 *
 * O(laps · length / 10 m).
 *
 * @returns null on an open path, or without two clean laps in a row (a single clean lap is its own)
 */
export function rollingLap(placed: PlacedRun): RollingLap | null {
	const { path, laps } = placed;
	if (!path.closed) return null;
	const { lengthM } = path;
	let best: RollingLap | null = null;
	const clean = (lap: Lap | undefined): lap is Lap & { turn: number } => lap?.clean === true && lap.turn !== null;
	laps.forEach((lap, k) => {
		if (!clean(lap)) return;
		const next = laps[k + 1];
		const goesOn = clean(next) && next.turn === lap.turn + 1;
		const lastM = goesOn ? lengthM - STEP_M / 2 : 0;
		for (let m = 0; m <= lastM; m += STEP_M) {
			const from = lap.turn * lengthM + m;
			const timeS = timeAtPlace(placed, from + lengthM) - timeAtPlace(placed, from);
			if (timeS > 0 && !(best && best.timeS <= timeS)) best = { timeS, startM: m, lap: lap.number };
		}
	});
	return best;
}
