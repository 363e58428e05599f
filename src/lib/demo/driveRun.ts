import { KMH_PER_MPS } from '../units.ts';
import { calmestLine } from './calmestLine.ts';
import type { CentreLine } from './centreLine.ts';
import { drivenLine, type DrivenLine } from './drivenLine.ts';
import type { DemoDriver } from './driver.ts';
import { planCorner, type CornerPlan } from './planCorner.ts';
import { seededRandom } from './seededRandom.ts';
import { moveOn, type Motion } from './moveOn.ts';
import type { DemoVehicle } from './vehicle.ts';

export interface DriveOptions {
	driver: DemoDriver;
	vehicle: DemoVehicle;
	/** timed laps between the out lap and the end of the file */
	laps: number;
	sampleRateHz: number;
	/** tells runs of one driver apart */
	run: number;
	/** share of grip that a lap on these tyres costs */
	fallOffPerLap?: number;
	/** 0–1: how much of the habits is left (a driver who has worked on them) */
	habitShare?: number;
}

/** A recording as a logger would have it: columns of equal length. */
export interface DrivenRun {
	timeS: number[];
	lap: number[];
	distanceM: number[];
	speedKmh: number[];
	throttlePct: number[];
	brakePct: number[];
	steeringDeg: number[];
	gear: number[];
	engineSpeedRpm: number[];
	xM: number[];
	yM: number[];
	accLongMps2: number[];
	accLatMps2: number[];
}

const STEP_S = 1 / 400;

/**
 * Drives an out lap, timed laps and a piece of the in lap, corner by corner: plan, brake, turn, pick up. One clean brake
 * application a corner; places and pressures vary from lap to lap as a person's do. Deterministic.
 */
export function driveRun(road: CentreLine, options: DriveOptions): DrivenRun {
	const { driver, vehicle } = options;
	const random = seededRandom(driver.seed * 7919 + options.run * 104_729);
	const total = road.lengthM;
	const base = calmestLine(road, total < 1200 ? driver.widthM * 0.6 : driver.widthM);
	const lines = Array.from({ length: options.laps + 2 }, (): DrivenLine =>
		drivenLine(road, {
			base,
			lateM: driver.lateM * (total < 1200 ? 0.3 : 1),
			wanderM: road.corners.map(() => 0.22 * driver.spread * random.normal())
		})
	);
	const lineAt = (place: number): DrivenLine => lines[Math.min(lines.length - 1, Math.floor(place / total) + 1)];
	const out: DrivenRun = {
		timeS: [],
		lap: [],
		distanceM: [],
		speedKmh: [],
		throttlePct: [],
		brakePct: [],
		steeringDeg: [],
		gear: [],
		engineSpeedRpm: [],
		xM: [],
		yM: [],
		accLongMps2: [],
		accLatMps2: []
	};

	let motion: Motion = { placeM: -0.42 * total, speedMps: 0.5 * vehicle.topSpeedMps, throttle: 1, brake: 0 };
	const endM = options.laps * total + Math.min(420, 0.35 * total);
	let driven = 0;
	let time = 0;
	let nextSample = 0;
	let corner = road.corners.findIndex((c) => c.apexM > motion.placeM + total + 40);
	let turn = -1;
	let plan: CornerPlan | null = null;
	let tremor = 0;
	let previousSpeed = motion.speedMps;
	while (motion.placeM < endM) {
		if (plan === null || motion.placeM > plan.doneM) {
			if (plan !== null) {
				corner++;
				if (corner >= road.corners.length) {
					corner = 0;
					turn++;
				}
			}
			const lapIndex = Math.max(0, turn);
			// An out lap is driven with care; a stint costs grip.
			const grip = turn < 0 ? 0.9 : 1 - (options.fallOffPerLap ?? 0) * lapIndex;
			plan = planCorner({
				road,
				line: lines[Math.min(lines.length - 1, turn + 1)],
				cornerIndex: corner,
				turn,
				motion,
				vehicle,
				driver,
				grip,
				habitShare: options.habitShare ?? 1,
				random
			});
		}
		const line = lineAt(motion.placeM);
		tremor += (-tremor * STEP_S) / 0.12 + random.normal() * 0.055 * Math.sqrt(STEP_S);
		const next = moveOn(motion, plan, line, total, vehicle, STEP_S, 1 + tremor);
		if (time >= nextSample) {
			const acc = (next.speedMps - previousSpeed) / STEP_S;
			sample(out, { time, motion, line, total, driven, acc, vehicle, random });
			nextSample += 1 / options.sampleRateHz;
		}
		previousSpeed = next.speedMps;
		driven += ((motion.speedMps + next.speedMps) / 2) * STEP_S;
		motion = next;
		time += STEP_S;
	}
	return out;
}

interface SampleState {
	time: number;
	motion: Motion;
	line: DrivenLine;
	total: number;
	driven: number;
	acc: number;
	vehicle: DemoVehicle;
	random: { normal: () => number };
}

/** Writes one row: the sensors' own noise is added here and nowhere else. */
function sample(out: DrivenRun, state: SampleState): void {
	const { motion, line, total, vehicle, random } = state;
	const s = ((motion.placeM % total) + total) % total;
	const i = Math.floor(s) % total;
	const j = (i + 1) % total;
	const f = s - Math.floor(s);
	const at = (values: Float64Array): number => values[i] + (values[j] - values[i]) * f;
	const v = motion.speedMps;
	const curvature = at(line.curvaturePerM);
	const ratio = Math.max(0.12, v / vehicle.topSpeedMps);
	const gear = Math.min(vehicle.topGear, Math.max(1, Math.ceil(ratio ** 0.8 * vehicle.topGear)));
	out.timeS.push(state.time);
	out.lap.push(Math.max(0, Math.floor(motion.placeM / total) + 1));
	out.distanceM.push(state.driven);
	out.speedKmh.push(Math.max(0, v * KMH_PER_MPS + 0.05 * random.normal()));
	out.throttlePct.push(100 * motion.throttle);
	out.brakePct.push(100 * motion.brake);
	out.steeringDeg.push(
		((Math.atan(vehicle.wheelbaseM * curvature) * 180) / Math.PI) * vehicle.steeringRatio * (1 + 0.0011 * v) +
			0.35 * random.normal()
	);
	out.gear.push(gear);
	out.engineSpeedRpm.push(
		Math.round(vehicle.limiterRpm * Math.min(1, ratio / (gear / vehicle.topGear) ** 1.25) + 12 * random.normal())
	);
	out.xM.push(at(line.xM) + 0.03 * random.normal());
	out.yM.push(at(line.yM) + 0.03 * random.normal());
	out.accLongMps2.push(state.acc + 0.12 * random.normal());
	out.accLatMps2.push(v * v * curvature + 0.15 * random.normal());
}
