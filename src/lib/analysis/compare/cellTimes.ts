import type { Cell } from '../../schemas/analysisDocument.ts';
import type { Lap, PlacedRun } from '../model.ts';
import { timeAtPlace } from '../trace/placeTime.ts';

/**
 * Time that a lap takes for each cell. A cell that the line cuts is measured on the continuous run, into the lap after.
 *
 * @returns s, one entry for each cell; null where the lap is no whole turn, or the run does not reach the cell's end
 */
export function cellTimes(placed: PlacedRun, lap: Lap, cells: readonly Cell[]): (number | null)[] {
	const { turn } = lap;
	if (turn === null) return cells.map(() => null);
	const { lengthM } = placed.path;
	return cells.map(({ startM, endM }) => {
		const beyond = endM > startM ? 0 : lengthM;
		const timeS = timeAtPlace(placed, turn * lengthM + endM + beyond) - timeAtPlace(placed, turn * lengthM + startM);
		return Number.isFinite(timeS) ? timeS : null;
	});
}

/**
 * Theoretical best: the best time of each cell over the clean laps, added up.
 *
 * @param cellS one row for each clean lap
 * @returns null where there are no cells, or no lap has a time for one of them
 */
export function theoreticalBest(cellS: readonly (readonly (number | null)[])[], cells: number): number | null {
	if (cells === 0) return null;
	let sumS = 0;
	for (let cell = 0; cell < cells; cell++) {
		const times = cellS.map((row) => row[cell]).filter((timeS) => timeS !== null);
		if (times.length === 0) return null;
		sumS += Math.min(...times);
	}
	return sumS;
}
