import { KMH_PER_MPS } from '../../units.ts';
import type { LapGrid } from '../model.ts';

/** What a run has shown that the car can do: combined acceleration by speed, in bins of 20 km/h. */
export interface GripEnvelope {
	/** m/s² by bin; NaN where the run says nothing */
	mps2: Float64Array;
}

const BIN_KMH = 20;
const BINS = 20;
/** Readings, 1 m apart, that make a bin. */
const LEAST_READINGS = 25;
/** Not the largest, which is a kerb or the jitter of positions. */
const QUANTILE = 0.95;
/** Half of the stretch over which the longitudinal acceleration is read. */
const HALF_M = 4;

/** Combined acceleration √(a_lat² + a_long²) at a metre of a lap, from its own curvature and speed; NaN where not known. */
export function combinedAcceleration({ curvaturePerM, speedKmh }: LapGrid, i: number): number {
	if (!curvaturePerM || i < HALF_M || i + HALF_M >= speedKmh.length) return NaN;
	const square = (k: number) => (speedKmh[k] / KMH_PER_MPS) ** 2;
	const along = (square(i + HALF_M) - square(i - HALF_M)) / (4 * HALF_M);
	return Math.hypot(curvaturePerM[i] * square(i), along);
}

const binOf = (speedKmh: number): number => Math.min(Math.floor(speedKmh / BIN_KMH), BINS - 1);

/**
 * Envelope of a run's laps: the 95th percentile of the combined acceleration at each speed.
 *
 * @param grids laps of the run, at least one
 * @returns null where no lap knows its own curvature
 */
export function gripEnvelope(grids: readonly LapGrid[]): GripEnvelope | null {
	const readings = Array.from({ length: BINS }, (): number[] => []);
	for (const grid of grids) {
		for (let i = grid.marginM; i < grid.marginM + grid.lengthM; i++) {
			const mps2 = combinedAcceleration(grid, i);
			if (Number.isFinite(mps2) && grid.speedKmh[i] >= 0) readings[binOf(grid.speedKmh[i])].push(mps2);
		}
	}
	if (readings.every((held) => held.length < LEAST_READINGS)) return null;
	const mps2 = Float64Array.from(readings, (held) => {
		if (held.length < LEAST_READINGS) return NaN;
		const sorted = Float64Array.from(held).sort();
		return sorted[Math.round(QUANTILE * (sorted.length - 1))];
	});
	return { mps2 };
}

/**
 * Share of the envelope that a lap uses between two places, the mean over its metres.
 *
 * @returns null where the envelope says nothing of those speeds
 */
export function gripShareAt(envelope: GripEnvelope, grid: LapGrid, fromM: number, toM: number): number | null {
	let sum = 0;
	let count = 0;
	for (let m = Math.round(fromM); m <= toM; m++) {
		const i = m + grid.marginM;
		const share = combinedAcceleration(grid, i) / envelope.mps2[binOf(grid.speedKmh[i])];
		if (!Number.isFinite(share)) continue;
		sum += share;
		count++;
	}
	return count >= 3 ? sum / count : null;
}
