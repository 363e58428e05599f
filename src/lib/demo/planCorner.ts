import { KMH_PER_MPS } from '../units.ts';
import type { CentreLine } from './centreLine.ts';
import type { DrivenLine } from './drivenLine.ts';
import type { DemoDriver } from './driver.ts';
import { moveOn, type Motion } from './moveOn.ts';
import type { DemoVehicle } from './vehicle.ts';

/** A driver's intention for one corner, places on the centre line (turn · length + s). */
export interface CornerPlan {
	kind: 'braked' | 'lifted' | 'flat';
	/** throttle closes from here */
	liftM: number;
	onsetM: number;
	/** 0–1 */
	peak: number;
	releaseM: number;
	releaseShape: number;
	offM: number;
	liftTo: number;
	pickUpM: number;
	rampM: number;
	/** the next corner is planned from here on */
	doneM: number;
	grip: number;
	/** until here the throttle still follows the corner before */
	fullFromM: number;
	carriedThrottle: (placeM: number) => number;
}

export interface PlanInput {
	road: CentreLine;
	line: DrivenLine;
	cornerIndex: number;
	turn: number;
	motion: Motion;
	vehicle: DemoVehicle;
	driver: DemoDriver;
	grip: number;
	habitShare: number;
	random: { normal: () => number };
}

const PLAN_STEP_S = 1 / 150;
/** A stop that takes less than this off is done by lifting. */
const LIFT_KMH = 9;

/** Speed on arriving at a place under a plan. */
function speedAt(input: PlanInput, plan: CornerPlan, placeM: number): number {
	let motion = input.motion;
	for (let k = 0; motion.placeM < placeM && k < 20_000; k++) {
		motion = moveOn(motion, plan, input.line, input.road.lengthM, input.vehicle, PLAN_STEP_S, 1);
	}
	return motion.speedMps;
}

/** Finds x in [low, high] where a rising function passes zero. */
function bisect(low: number, high: number, rising: (x: number) => number): number {
	for (let k = 0; k < 22; k++) {
		const middle = (low + high) / 2;
		if (rising(middle) > 0) high = middle;
		else low = middle;
	}
	return (low + high) / 2;
}

/**
 * Plans one corner: the latest onset that still reaches the corner's speed with this driver's pedal, then the driver's own
 * habits and the lap's own spread on top; where those make the stop too long, the pedal comes back sooner, as feet do.
 */
export function planCorner(input: PlanInput): CornerPlan {
	const { road, vehicle, driver, random, turn } = input;
	const corner = road.corners[input.cornerIndex];
	const base = turn * road.lengthM;
	const habit = driver.habits[corner.name] ?? {};
	const share = input.habitShare;
	const spread = driver.spread;
	const small = road.lengthM < 1200;
	const length = corner.endM - corner.startM;
	const apexM = base + corner.startM + length * 0.5;

	const slower = ((habit.slowerKmh ?? 0) * share) / KMH_PER_MPS;
	// A line that uses the road's width turns on a larger radius than its middle.
	const target =
		Math.sqrt(vehicle.lateralMps2 * input.grip * (corner.radiusM * 1.12 + (small ? 1.5 : 4))) * driver.skill -
		slower +
		0.22 * spread * random.normal();
	const pickUpM =
		apexM + (small ? 1 : 2.5) + (habit.picksUpLaterM ?? 0) * share + (small ? 0.8 : 1.6) * spread * random.normal();
	const rampM = (small ? 9 : 24) + Math.abs(2.5 * spread * random.normal());
	const startThrottle = input.motion.throttle;
	const startM = input.motion.placeM;
	const nextPlanM = Math.max(pickUpM + rampM * 0.55, base + corner.endM - 2);
	const plan: CornerPlan = {
		kind: 'flat',
		liftM: Infinity,
		onsetM: Infinity,
		peak: 0,
		releaseM: Infinity,
		releaseShape: driver.releaseShape,
		offM: Infinity,
		liftTo: 0.25,
		pickUpM: Infinity,
		rampM,
		doneM: nextPlanM,
		grip: input.grip,
		fullFromM: startM + rampM * 0.5,
		carriedThrottle: (placeM) => startThrottle + (1 - startThrottle) * Math.min(1, (placeM - startM) / (rampM * 0.5))
	};
	const arrival = speedAt(input, plan, apexM);
	const drop = (arrival - target) * KMH_PER_MPS;
	if (drop < 1) return plan;
	const noiseM = (small ? 0.7 : 2.2) * spread * random.normal();
	if (drop < LIFT_KMH) {
		const lifted: CornerPlan = { ...plan, kind: 'lifted', pickUpM };
		const liftM = bisect(
			Math.max(startM, apexM - 70),
			apexM - 4,
			(x) => speedAt(input, { ...lifted, liftM: x }, apexM) - target
		);
		return { ...lifted, liftM: liftM + noiseM * 0.6 - (habit.brakesEarlierM ?? 0) * share * 0.5 };
	}

	const offM = Math.min(apexM - (small ? 0.5 : 2) + 0.8 * spread * random.normal(), pickUpM - (small ? 0.8 : 2));
	const usual = Math.min(0.76, 0.33 + drop * (small ? 0.011 : 0.0052));
	const peakWanted = habit.peakPct === undefined ? usual : usual + (habit.peakPct / 100 - usual) * share;
	const peak = Math.min(0.99, Math.max(0.2, peakWanted + 0.022 * spread * random.normal()));
	const braked = (onsetM: number, releaseShare: number, off = offM): CornerPlan => ({
		...plan,
		kind: 'braked',
		peak,
		onsetM,
		liftM: onsetM - arrival * 0.07,
		releaseM: off - (off - onsetM) * releaseShare,
		offM: off,
		pickUpM
	});
	const overshoot = (candidate: CornerPlan): number => speedAt(input, candidate, candidate.offM) - target;
	const latest = bisect(startM + 1, offM - 4, (x) => overshoot(braked(x, driver.releaseShare)));
	const onsetM = Math.max(startM + 1, latest + noiseM * 0.8 - (habit.brakesEarlierM ?? 0) * share);
	// A longer release brakes less: the speed at its end rises with its share.
	const releaseShare = bisect(0.25, 0.96, (x) => overshoot(braked(onsetM, x)));
	const settled = braked(onsetM, releaseShare);
	if (overshoot(settled) > -0.3) return settled;
	// Even the longest release is too much: the foot leaves the pedal before the apex, and the car rolls.
	const sooner = bisect(0, 1, (x) => overshoot(braked(onsetM, releaseShare, offM - x * (offM - onsetM) * 0.5)));
	return braked(onsetM, releaseShare, offM - sooner * (offM - onsetM) * 0.5);
}
