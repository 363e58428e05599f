import type { Corner } from '../../schemas/analysisDocument.ts';
import { fitFullThrottle, type FullThrottleModel } from '../car/fullThrottle.ts';
import type { PlacedRun } from '../model.ts';
import { brakeApplications, HOLE_S, type BrakeApplication } from './brakeApplications.ts';
import type { Span } from './coasting.ts';
import { cornerPassages, type CornerPassage } from './cornerPassages.ts';
import type { Signal } from './crossing.ts';
import { measureBraking, type Braking } from './measureBraking.ts';
import { noiseLevel, pedalNoise } from './noiseLevel.ts';
import { quickestFall, quickestRise } from './quickestStroke.ts';
import { speedTrace, type SpeedTrace } from './steadySpeed.ts';

/** A run with all that its corners are measured from, worked out once. */
export interface MeasuredRun {
	placed: PlacedRun;
	speed: SpeedTrace;
	/** % from rest; null without a channel */
	brake: Signal | null;
	throttle: Signal | null;
	/** steering, or else the curvature of the car's own line, left positive; null where neither is known */
	turning: Signal | null;
	/** slope of the quickest lifts, % per s */
	quickestLift: number | null;
	passages: CornerPassage[];
	/** every braking of the run, measured, in order */
	brakings: Braking[];
	brakingOf: Map<BrakeApplication, Braking>;
	/** holes in the recording, in order: what happened in them is not known */
	holes: Span[];
	/** when the brake was not off, in order */
	brakeSpans: Span[];
	fullThrottle: FullThrottleModel | null;
}

/**
 * Works out what the corners of a run are measured from: pedal noise, every braking and the corner it belongs to.
 *
 * @param placed  the run on its path
 * @param corners the corner map
 */
export function prepareRun(placed: PlacedRun, corners: Corner[]): MeasuredRun {
	const { channels } = placed;
	const { timeS, brakePct, throttlePct } = channels;
	const speed = speedTrace(placed);
	const brake = brakePct && { timeS, values: brakePct, noise: pedalNoise(brakePct) };
	const throttle = throttlePct && { timeS, values: throttlePct, noise: pedalNoise(throttlePct) };
	const turning = channels.steeringDeg ?? placed.curvaturePerM;
	const applications = brake ? brakeApplications(brake, speed.speedKmh, speed.noiseKmh) : [];
	const passages = cornerPassages(placed, corners, applications);
	const brakings: Braking[] = [];
	const brakingOf = new Map<BrakeApplication, Braking>();
	if (brake) {
		const cornerOf = new Map<BrakeApplication, number>();
		for (const { brakings: own, corner } of passages) for (const one of own) cornerOf.set(one, corner.number);
		const rises = quickestRise(brake, applications, cornerOf);
		for (const application of applications) {
			const rise = rises(cornerOf.get(application) ?? null);
			const braking = measureBraking(brake, application, speed.sampleS, { rise, fall: null });
			brakings.push(braking);
			brakingOf.set(application, braking);
		}
	}
	return {
		placed,
		speed,
		brake,
		throttle,
		turning: turning && { timeS, values: turning, noise: noiseLevel(turning) },
		quickestLift: throttle && quickestFall(throttle),
		passages,
		brakings,
		brakingOf,
		holes: holesOf(timeS),
		brakeSpans: brakings.map((one) => ({ startS: one.leavesRestS, endS: one.off?.timeS ?? Infinity })),
		fullThrottle: fitFullThrottle(channels)
	};
}

function holesOf(timeS: Float64Array): Span[] {
	const holes: Span[] = [];
	for (let i = 1; i < timeS.length; i++) {
		if (timeS[i] - timeS[i - 1] > HOLE_S) holes.push({ startS: timeS[i - 1], endS: timeS[i] });
	}
	return holes;
}

/** Is a moment, or a part of a stretch, in a hole of the recording. */
export function touchesHole({ holes }: MeasuredRun, fromS: number, toS: number = fromS): boolean {
	return holes.some(({ startS, endS }) => startS < toS && endS > fromS);
}
