import type { LapGrid } from '../model.ts';
import { KMH_PER_MPS } from '../../units.ts';
import type { Cause, CornerCase } from './causes.ts';

/** Steering over the reference's by this share, and this much, for no tighter a line … */
export const MORE_STEERING = 1.2;
export const LEAST_MORE_DEG = 8;
/** … within this share of its curvature … */
const SAME_CURVATURE = 1.04;
/** … and with no more lateral acceleration than this share of its: more would explain more steering. */
const SAME_LATERAL = 1.03;

interface ExitSteering {
	steeringDeg: number;
	curvaturePerM: number;
	lateralMps2: number;
}

function exitSteering(grid: LapGrid, fromM: number, toM: number): ExitSteering | null {
	const { steeringDeg, curvaturePerM, speedKmh, marginM } = grid;
	if (!steeringDeg || !curvaturePerM) return null;
	let count = 0;
	const sum: ExitSteering = { steeringDeg: 0, curvaturePerM: 0, lateralMps2: 0 };
	for (let m = Math.round(fromM); m <= toM; m++) {
		const i = m + marginM;
		const curvature = Math.abs(curvaturePerM[i]);
		const steering = Math.abs(steeringDeg[i]);
		if (!Number.isFinite(curvature + steering)) continue;
		sum.steeringDeg += steering;
		sum.curvaturePerM += curvature;
		sum.lateralMps2 += curvature * (speedKmh[i] / KMH_PER_MPS) ** 2;
		count++;
	}
	if (count < 3) return null;
	return {
		steeringDeg: sum.steeringDeg / count,
		curvaturePerM: sum.curvaturePerM / count,
		lateralMps2: sum.lateralMps2 / count
	};
}

/**
 * Scrub on the way out: more steering than the reference from the apex on, and no more curvature, so that the front tyres are dragged.
 *
 * @returns null without steering or positions, or where more curvature or lateral acceleration explains the angle
 */
export function scrub({ place, driverGrid, referenceGrid }: CornerCase): Cause | null {
	const driver = exitSteering(driverGrid, place.apexM, place.endM);
	const reference = exitSteering(referenceGrid, place.apexM, place.endM);
	if (!driver || !reference) return null;
	if (!(driver.steeringDeg > MORE_STEERING * reference.steeringDeg)) return null;
	if (!(driver.steeringDeg - reference.steeringDeg > LEAST_MORE_DEG)) return null;
	if (!(driver.curvaturePerM < SAME_CURVATURE * reference.curvaturePerM)) return null;
	if (!(driver.lateralMps2 < SAME_LATERAL * reference.lateralMps2)) return null;
	const at = { atM: Math.round(place.apexM), plusMinus: null };
	return {
		code: 'scrub',
		field: null,
		evidence: [
			{ quantity: 'steering', unit: '°', driver: driver.steeringDeg, reference: reference.steeringDeg, ...at },
			{
				quantity: 'radius',
				unit: 'm',
				driver: 1 / driver.curvaturePerM,
				reference: 1 / reference.curvaturePerM,
				...at
			}
		]
	};
}
