import type { CornerPlaces } from '../compare/cornerPlaces.ts';
import { gapIndex, type SpeedGap } from '../compare/speedGap.ts';

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

/** First index at or after `from` where the speed is at or below `level`, up to `to`; −1 where it stays above. */
function reaches(speedMps: Float64Array, level: number, from: number, to: number): number {
	for (let i = from; i <= to; i++) if (speedMps[i] <= level) return i;
	return -1;
}

function lowest(speedMps: Float64Array, from: number, to: number): number {
	let low = Infinity;
	for (let i = from; i <= to; i++) if (speedMps[i] < low) low = speedMps[i];
	return low;
}

/**
 * Compares how hard both laps brake for a corner, by v² = 2·a·s.
 *
 * @returns null where either lap does not brake for the corner, or hardly slows down
 */
export function brakingStrength(gap: SpeedGap, place: CornerPlaces): BrakingStrength | null {
	const onsetDriverM = place.driver.onsetM;
	const onsetReferenceM = place.reference.onsetM;
	if (onsetDriverM === null || onsetReferenceM === null) return null;
	const d = gapIndex(gap, onsetDriverM);
	const r = gapIndex(gap, onsetReferenceM);
	const end = gapIndex(gap, Math.max(place.endM, onsetDriverM + 1, onsetReferenceM + 1));
	const { driverMps, referenceMps } = gap;
	const common = Math.max(lowest(driverMps, d, end), lowest(referenceMps, r, end)) + ABOVE_MINIMUM_MPS;
	if (!(driverMps[d] > common + LEAST_DROP_MPS && referenceMps[r] > common + LEAST_DROP_MPS)) return null;
	const driverAt = reaches(driverMps, common, d, end);
	const referenceAt = reaches(referenceMps, common, r, end);
	if (driverAt <= d || referenceAt <= r) return null;
	const mean = (fromMps: number, metres: number) => (fromMps * fromMps - common * common) / (2 * metres);
	const driverMps2 = mean(driverMps[d], driverAt - d);
	const referenceMps2 = mean(referenceMps[r], referenceAt - r);
	// going on as the reference does before its own onset, up to where its deceleration still suffices
	let later = d;
	while (later < r) {
		const gained = (referenceMps[later + 1] ** 2 - referenceMps[d] ** 2) / 2;
		const reached = driverMps[d] ** 2 + 2 * gained;
		if (reached - common * common > 2 * referenceMps2 * (driverAt - later - 1)) break;
		later++;
	}
	return { driverMps2, referenceMps2, laterByStrengthM: later - d };
}
