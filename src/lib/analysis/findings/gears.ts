import type { LapGrid } from '../model.ts';
import { fullThrottleEntry } from './fullThrottleEntry.ts';
import type { Cause, CornerCase } from './causes.ts';

/** A shift at this share of the reference's engine speed, or less, is short. */
export const SHORT_SHARE = 0.92;
/** Metres in one gear that make it the gear of the corner. */
const SETTLED_M = 5;

/** Gear at a place, where it stays for some metres; NaN else. */
function gearAt({ gear, marginM }: LapGrid, placeM: number): number {
	const i = Math.round(placeM) + marginM;
	const here = gear?.[i] ?? NaN;
	const settled = gear?.[i + SETTLED_M] === here || gear?.[i - SETTLED_M] === here;
	return here > 0 && settled ? here : NaN;
}

/** Another gear than the reference's at the apex. */
export function otherGear({ place, driverGrid, referenceGrid }: CornerCase): Cause | null {
	const atM = Math.round(place.apexM);
	const driver = gearAt(driverGrid, atM);
	const reference = gearAt(referenceGrid, atM);
	if (!Number.isFinite(driver + reference) || driver === reference) return null;
	return {
		code: 'gear_other',
		field: null,
		evidence: [{ quantity: 'gear', unit: '', driver, reference, atM, plusMinus: null }]
	};
}

interface Shift {
	atM: number;
	rpm: number;
	gear: number;
}

/** Engine speed just before the first shift up at full throttle behind the apex. */
function firstShiftUp(grid: LapGrid, fromM: number): Shift | null {
	const { gear, engineSpeedRpm, lengthM, marginM } = grid;
	const from = fullThrottleEntry(grid, fromM);
	if (!gear || !engineSpeedRpm || from === null) return null;
	for (let m = from; m < from + lengthM / 2 && m + marginM + 1 < gear.length; m++) {
		const i = m + marginM;
		if ((grid.throttlePct?.[i] ?? 0) < 50) return null;
		if (!(gear[i + 1] > gear[i] && gear[i] > 0)) continue;
		const rpm = Math.max(...engineSpeedRpm.subarray(Math.max(0, i - 3), i + 1));
		return rpm > 0 ? { atM: m, rpm, gear: gear[i] } : null;
	}
	return null;
}

/** The first shift up out of the corner comes at a clearly lower engine speed than the reference's, from the same gear. */
export function shortShift({ place, driverGrid, referenceGrid }: CornerCase): Cause | null {
	const driver = firstShiftUp(driverGrid, place.apexM);
	const reference = firstShiftUp(referenceGrid, place.apexM);
	if (!driver || !reference || driver.gear !== reference.gear) return null;
	if (!(driver.rpm < SHORT_SHARE * reference.rpm)) return null;
	return {
		code: 'short_shift',
		field: null,
		evidence: [
			{
				quantity: 'shiftSpeed',
				unit: '1/min',
				driver: driver.rpm,
				reference: reference.rpm,
				atM: driver.atM,
				plusMinus: null
			}
		]
	};
}
