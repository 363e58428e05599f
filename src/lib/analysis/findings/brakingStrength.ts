import type { CornerPlaces } from '../compare/cornerPlaces.ts';
import type { LapGrid } from '../model.ts';
import { KMH_PER_MPS } from '../../units.ts';

/** How hard both laps slow down for one corner, from the same two kinds of place: the onset and a speed that both reach. */
export interface BrakingStrength {
	/** mean deceleration from the lap's onset to the common speed, m/s² */
	driverMps2: number;
	referenceMps2: number;
	/**
	 * by how much later the driver could have braked with the reference's mean deceleration and still have reached the same speed at the
	 * same place, m, from 0 to the whole difference of the onsets
	 */
	laterByStrengthM: number;
}

/** Kept above the lowest speed: a plateau at the minimum would count as braking. */
const ABOVE_MINIMUM_MPS = 0.6;
/** Speed that a braking must take off before its mean deceleration says anything. */
const LEAST_DROP_MPS = 3;
const STEP_M = 0.25;

/** Speed by place on one lap's grid, linear between metres, in m/s. */
function speedAt({ speedKmh, marginM }: LapGrid, placeM: number): number {
	const at = Math.min(Math.max(placeM + marginM, 0), speedKmh.length - 1);
	const i = Math.min(Math.floor(at), speedKmh.length - 2);
	return (speedKmh[i] + (speedKmh[i + 1] - speedKmh[i]) * (at - i)) / KMH_PER_MPS;
}

function lowest(grid: LapGrid, fromM: number, toM: number): number {
	let low = Infinity;
	for (let m = fromM; m <= toM; m++) low = Math.min(low, speedAt(grid, m));
	return low;
}

/** First place from `fromM` on where the speed is down to a level; NaN where it stays above. */
function reaches(grid: LapGrid, levelMps: number, fromM: number, toM: number): number {
	for (let m = fromM; m < toM; m++) {
		const next = speedAt(grid, m + 1);
		if (next > levelMps) continue;
		const here = speedAt(grid, m);
		return here > next ? m + Math.min(Math.max((here - levelMps) / (here - next), 0), 1) : m;
	}
	return NaN;
}

/**
 * Compares how hard both laps brake for a corner, by v² = 2·a·s.
 *
 * @returns null where either lap does not brake for the corner, or hardly slows down
 */
export function brakingStrength(driver: LapGrid, reference: LapGrid, place: CornerPlaces): BrakingStrength | null {
	const driverM = place.driver.onsetM;
	const referenceM = place.reference.onsetM;
	if (driverM === null || referenceM === null) return null;
	const endM = Math.max(place.endM, driverM + 1, referenceM + 1);
	const common = Math.max(lowest(driver, driverM, endM), lowest(reference, referenceM, endM)) + ABOVE_MINIMUM_MPS;
	const driverMps = speedAt(driver, driverM);
	const referenceMps = speedAt(reference, referenceM);
	if (!(driverMps > common + LEAST_DROP_MPS && referenceMps > common + LEAST_DROP_MPS)) return null;
	const driverToM = reaches(driver, common, driverM, endM);
	const referenceToM = reaches(reference, common, referenceM, endM);
	if (!(driverToM > driverM && referenceToM > referenceM)) return null;
	const mean = (fromMps: number, metres: number) => (fromMps * fromMps - common * common) / (2 * metres);
	const driverMps2 = mean(driverMps, driverToM - driverM);
	const referenceMps2 = mean(referenceMps, referenceToM - referenceM);
	// going on as the reference does before its own onset, up to where its deceleration still suffices
	const without = speedAt(reference, driverM) ** 2;
	let laterM = 0;
	while (driverM + laterM < referenceM) {
		const nextM = Math.min(driverM + laterM + STEP_M, referenceM);
		const reached = driverMps ** 2 + speedAt(reference, nextM) ** 2 - without;
		if (reached - common * common > 2 * referenceMps2 * (driverToM - nextM)) break;
		laterM = nextM - driverM;
	}
	return { driverMps2, referenceMps2, laterByStrengthM: laterM };
}
