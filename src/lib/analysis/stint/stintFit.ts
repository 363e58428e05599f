import { fitLine, type LineFit } from '../stats/fitLine.ts';
import { theilSen } from '../stats/theilSen.ts';

/** What burning fuel does to lap times. */
export interface FuelEffect {
	kgPerLap: number;
	sPerKg: number;
}

export interface StintFit extends LineFit {
	/** median of the slopes of all pairs, s per lap */
	theilSen: number;
	/** correlation of residuals of laps that follow each other; 0 where none do */
	autocorrelation: number;
}

/**
 * Lap time over laps on this tyre set: least squares and Theil–Sen on the laps given.
 *
 * @param laps the laps' numbers, increasing
 * @param timesS their times
 * @returns null with fewer than three laps
 */
export function fitStint(laps: readonly number[], timesS: readonly number[]): StintFit | null {
	const line = fitLine(laps, timesS);
	const robust = theilSen(laps, timesS);
	if (!line || !robust) return null;
	const residuals = laps.map((lap, i) => timesS[i] - line.intercept - line.slope * lap);
	return { ...line, theilSen: robust.slope, autocorrelation: autocorrelation(laps, residuals) };
}

/** Slope without what the burnt fuel gives: each lap is lighter than the one before. */
export function fuelCorrectedSlope(slopeSPerLap: number, { kgPerLap, sPerKg }: FuelEffect): number {
	return slopeSPerLap + kgPerLap * sPerKg;
}

function autocorrelation(laps: readonly number[], residuals: readonly number[]): number {
	let together = 0;
	let pairs = 0;
	let squares = 0;
	for (let i = 0; i < residuals.length; i++) {
		squares += residuals[i] ** 2;
		if (i > 0 && laps[i] === laps[i - 1] + 1) {
			together += residuals[i] * residuals[i - 1];
			pairs++;
		}
	}
	if (pairs === 0 || squares === 0) return 0;
	return Math.max(-1, Math.min(1, (together / pairs) * (residuals.length / squares)));
}
