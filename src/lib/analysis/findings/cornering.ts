import type { CornerPlaces } from '../compare/cornerPlaces.ts';
import type { LapGrid } from '../model.ts';
import { KMH_PER_MPS } from '../../units.ts';

/** What both laps make of the middle of a corner: the radius of their own lines and the lateral acceleration on it. */
export interface Cornering {
	driverRadiusM: number;
	referenceRadiusM: number;
	driverMps2: number;
	referenceMps2: number;
	/** driver's line minus the reference's, left positive; null without positions */
	offsetM: number | null;
	atM: number;
}

/** Half of the stretch about the apex that counts as the middle, by the corner's length. */
const MIDDLE_SHARE = 0.15;
const LEAST_HALF_M = 4;

function meanOver(column: Float64Array, grid: LapGrid, fromM: number, toM: number, of: (i: number) => number): number {
	let sum = 0;
	let count = 0;
	for (let m = fromM; m <= toM; m++) {
		const i = m + grid.marginM;
		if (!(i >= 0 && i < column.length)) continue;
		const value = of(i);
		if (!Number.isFinite(value)) continue;
		sum += value;
		count++;
	}
	return count ? sum / count : NaN;
}

/**
 * Radius and lateral acceleration v²·|κ| about the apex, for both laps.
 *
 * @returns null where either lap's own curvature is not known there
 */
export function corneringAt(driver: LapGrid, reference: LapGrid, place: CornerPlaces): Cornering | null {
	const half = Math.max(LEAST_HALF_M, MIDDLE_SHARE * (place.endM - place.startM));
	const fromM = Math.round(place.apexM - half);
	const toM = Math.round(place.apexM + half);
	const of = (grid: LapGrid) => {
		const { curvaturePerM, speedKmh } = grid;
		if (!curvaturePerM) return { radiusM: NaN, mps2: NaN };
		const curvature = meanOver(curvaturePerM, grid, fromM, toM, (i) => Math.abs(curvaturePerM[i]));
		const mps2 = meanOver(
			curvaturePerM,
			grid,
			fromM,
			toM,
			(i) => Math.abs(curvaturePerM[i]) * (speedKmh[i] / KMH_PER_MPS) ** 2
		);
		return { radiusM: 1 / curvature, mps2 };
	};
	const d = of(driver);
	const r = of(reference);
	if (!(d.radiusM > 0 && r.radiusM > 0 && Number.isFinite(d.mps2 + r.mps2))) return null;
	const offset = (grid: LapGrid) =>
		grid.offsetM ? meanOver(grid.offsetM, grid, fromM, toM, (i) => grid.offsetM?.[i] ?? NaN) : NaN;
	const apart = offset(driver) - offset(reference);
	return {
		driverRadiusM: d.radiusM,
		referenceRadiusM: r.radiusM,
		driverMps2: d.mps2,
		referenceMps2: r.mps2,
		offsetM: Number.isFinite(apart) ? apart : null,
		atM: Math.round(place.apexM)
	};
}
