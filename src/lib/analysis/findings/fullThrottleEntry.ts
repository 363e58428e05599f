import type { LapGrid } from '../model.ts';

const FULL_PCT = 95;

/**
 * First whole metre from a place on with the throttle fully open.
 *
 * @returns null without a throttle channel, or where it is not opened within a quarter of the lap
 */
export function fullThrottleEntry({ throttlePct, lengthM, marginM }: LapGrid, fromM: number): number | null {
	if (!throttlePct) return null;
	for (let m = Math.round(fromM); m < fromM + lengthM / 4 && m + marginM < throttlePct.length; m++)
		if (throttlePct[m + marginM] >= FULL_PCT) return m;
	return null;
}
