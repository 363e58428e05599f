import type { LapGrid } from '../analysis/model.ts';

/** Columns of a lap grid that are drawn. */
export type GridColumn = 'speedKmh' | 'brakePct' | 'throttlePct' | 'steeringDeg' | 'offsetM' | 'timeS';

/**
 * A lap grid's value at a place, linear between whole metres.
 *
 * @param placeM m from the lap's crossing of the line; below 0 and above the length within the margin
 * @returns NaN outside the grid, in a gap, and where the channel is absent
 */
export function gridValue(grid: LapGrid, column: GridColumn, placeM: number): number {
	const values = grid[column];
	if (values === null) return NaN;
	const at = placeM + grid.marginM;
	const low = Math.floor(at);
	if (low < 0 || low >= values.length) return NaN;
	const share = at - low;
	if (share === 0) return values[low];
	return low + 1 < values.length ? values[low] + (values[low + 1] - values[low]) * share : NaN;
}

/** Driver minus reference at a place, in s: positive is time lost. NaN where one of them is not known. */
export function deltaAt(driver: LapGrid, reference: LapGrid, placeM: number): number {
	return gridValue(driver, 'timeS', placeM) - gridValue(reference, 'timeS', placeM);
}

/** Whole metres from one place to another, both included. */
export function metresBetween(fromM: number, toM: number): number[] {
	return Array.from({ length: Math.max(0, Math.floor(toM) - Math.ceil(fromM) + 1) }, (_, i) => Math.ceil(fromM) + i);
}
