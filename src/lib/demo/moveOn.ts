import type { DrivenLine } from './drivenLine.ts';
import type { CornerPlan } from './planCorner.ts';
import { accelerationMps2, type DemoVehicle } from './vehicle.ts';

export interface Motion {
	/** on the centre line, turn · length + s */
	placeM: number;
	speedMps: number;
	/** 0–1 */
	throttle: number;
	/** 0–1 */
	brake: number;
}

/** Feet are quick but not infinitely so: full pedal in about 0.13 s, full throttle in about 0.2 s. */
const BRAKE_RISE_PER_S = 7.5;
const BRAKE_FALL_PER_S = 9;
const THROTTLE_RISE_PER_S = 5;
const THROTTLE_FALL_PER_S = 12;

const smooth = (f: number): number => (f <= 0 ? 0 : f >= 1 ? 1 : f * f * (3 - 2 * f));
const towards = (from: number, to: number, rise: number, fall: number): number =>
	to > from ? Math.min(to, from + rise) : Math.max(to, from - fall);

/** What the feet want at a place, by the plan for the corner ahead. */
function wanted(plan: CornerPlan, placeM: number, tremor: number): { throttle: number; brake: number } {
	if (plan.kind === 'flat' || placeM < plan.liftM) {
		return { throttle: placeM < plan.fullFromM ? plan.carriedThrottle(placeM) : 1, brake: 0 };
	}
	if (placeM >= plan.pickUpM) {
		return { throttle: 0.1 + 0.9 * smooth((placeM - plan.pickUpM) / plan.rampM), brake: 0 };
	}
	if (plan.kind === 'lifted') return { throttle: plan.liftTo, brake: 0 };
	if (placeM < plan.onsetM || placeM >= plan.offM) return { throttle: 0, brake: 0 };
	const rest = (placeM - plan.releaseM) / (plan.offM - plan.releaseM);
	const brake =
		placeM < plan.releaseM ? plan.peak * tremor : plan.peak * tremor * Math.max(0, 1 - rest) ** plan.releaseShape;
	return { throttle: 0, brake: brake < 0.012 ? 0 : Math.min(1, brake) };
}

/** Moves the car on by one step of time. */
export function moveOn(
	motion: Motion,
	plan: CornerPlan,
	line: DrivenLine,
	totalM: number,
	vehicle: DemoVehicle,
	stepS: number,
	tremor: number
): Motion {
	const want = wanted(plan, motion.placeM, tremor);
	const throttle = towards(motion.throttle, want.throttle, THROTTLE_RISE_PER_S * stepS, THROTTLE_FALL_PER_S * stepS);
	const brake = towards(motion.brake, want.brake, BRAKE_RISE_PER_S * stepS, BRAKE_FALL_PER_S * stepS);
	const acc = accelerationMps2(vehicle, motion.speedMps, throttle, brake, plan.grip);
	const speedMps = Math.max(2, motion.speedMps + acc * stepS);
	const i = Math.floor(((motion.placeM % totalM) + totalM) % totalM) % totalM;
	const placeM = motion.placeM + (((motion.speedMps + speedMps) / 2) * stepS) / line.stretch[i];
	return { placeM, speedMps, throttle, brake };
}
