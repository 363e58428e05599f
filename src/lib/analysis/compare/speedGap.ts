import type { LapGrid } from '../model.ts';

/**
 * How much slower the driver is than the reference along the path, in a measure that adds up: the difference of v²/2. Two laps
 * with the same acceleration keep it constant whatever their speed, so each cause adds its own part and carries it on.
 */
export interface SpeedGap {
	/** place of entry 0, m; entries are 1 m apart */
	fromM: number;
	/** speed along the path, m/s */
	driverMps: Float64Array;
	referenceMps: Float64Array;
	/** (v_ref² − v_driver²)/2, m²/s²; positive where the driver is slower; NaN where a lap lacks samples */
	deficit: Float64Array;
	/** time lost per metre for each unit of deficit: 2/((v_r + v_d)·v_r·v_d), s/m per m²/s² */
	lossPerDeficit: Float64Array;
}

/**
 * Half of the stretch over which a speed along the path is read. Shorter ones read the jitter of positions, longer ones blur
 * where a braking begins.
 */
const HALF_M = 3;

/** Speed along the path from the time at places, which is what Δ is made of; a speed channel would not see another line. */
function pathSpeed(grid: LapGrid, fromM: number, n: number): Float64Array {
	const { timeS, marginM } = grid;
	const speed = new Float64Array(n);
	for (let k = 0; k < n; k++) {
		const i = k + fromM + marginM;
		const low = Math.max(i - HALF_M, 0);
		const high = Math.min(i + HALF_M, timeS.length - 1);
		speed[k] = (high - low) / (timeS[high] - timeS[low]);
	}
	return speed;
}

/**
 * Speed gap between two laps on one path.
 *
 * @param fromM first place, whole m; may lie before the line, within both margins
 * @param toM   last place, whole m
 */
export function speedGap(driver: LapGrid, reference: LapGrid, fromM: number, toM: number): SpeedGap {
	const n = toM - fromM + 1;
	const driverMps = pathSpeed(driver, fromM, n);
	const referenceMps = pathSpeed(reference, fromM, n);
	const deficit = new Float64Array(n);
	const lossPerDeficit = new Float64Array(n);
	for (let k = 0; k < n; k++) {
		const d = driverMps[k];
		const r = referenceMps[k];
		deficit[k] = (r * r - d * d) / 2;
		lossPerDeficit[k] = 2 / ((r + d) * r * d);
	}
	return { fromM, driverMps, referenceMps, deficit, lossPerDeficit };
}

/** Entry of the gap's columns nearest to a place, held to the columns. */
export function gapIndex(gap: SpeedGap, placeM: number): number {
	return Math.min(Math.max(Math.round(placeM - gap.fromM), 0), gap.deficit.length - 1);
}
