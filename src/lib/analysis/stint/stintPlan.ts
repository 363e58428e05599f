import type { StintFit } from './stintFit.ts';

/**
 * Whole laps that the fuel left will last; the lap under way counts as begun with this much.
 *
 * @throws {RangeError} where a lap burns nothing
 * @example lapsOfFuelLeft(10, 2.1) // => 4
 */
export function lapsOfFuelLeft(fuelKg: number, kgPerLap: number): number {
	if (!(kgPerLap > 0)) throw new RangeError(`lapsOfFuelLeft requires kgPerLap > 0, got ${kgPerLap}`);
	// a full number of laps must not become one fewer by a rounding of the last digit
	return Math.max(0, Math.floor(fuelKg / kgPerLap + 1e-9));
}

/** A race that lasts longer than this many laps ends before. */
const MOST_LAPS = 5000;

/**
 * Minutes of driving until the quicker of two has gained a whole lap, both keeping to their lines.
 *
 * @param fromLap tyre age of both at the start
 * @returns null where neither gains a lap within 5 000 laps
 */
export function minutesUntilALap(
	first: Pick<StintFit, 'slope' | 'intercept'>,
	second: Pick<StintFit, 'slope' | 'intercept'>,
	fromLap = 1
): number | null {
	let gained = 0;
	let elapsed = 0;
	for (let lap = fromLap; lap < fromLap + MOST_LAPS; lap++) {
		const [a, b] = [first, second].map(({ slope, intercept }) => intercept + slope * lap);
		if (!(a > 0 && b > 0)) return null;
		const before = gained;
		gained += a - b;
		// who gains a lap is a lap of the slower one ahead
		const needed = gained > 0 ? a : b;
		if (Math.abs(gained) >= needed) {
			const share = (needed - Math.abs(before)) / Math.abs(gained - before);
			return (elapsed + share * Math.min(a, b)) / 60;
		}
		elapsed += Math.min(a, b);
	}
	return null;
}
