import type { BrakeApplication } from './brakeApplications.ts';
import type { Signal } from './crossing.ts';

/** One stroke may have caught a jump of the sensor; this share of the strokes is no quicker. */
const QUANTILE = 0.8;
/** A change from one sample to the next by this much is part of a quick stroke. */
const QUICK_STEP_PCT = 30;
const MOST_STEPS = 4000;

/**
 * How quickly this driver's foot goes onto the brake, corner by corner: where sampling is too coarse to show a ramp's slope in one lap,
 * the other laps, sampled at other moments, bound it.
 *
 * @param brake  % from rest
 * @param applications every braking of the run
 * @param cornerOf corner to which one belongs
 * @returns for a corner (or null: any), slope as share of the peak per s; null where under three strokes are known
 */
export function quickestRise(
	brake: Signal,
	applications: BrakeApplication[],
	cornerOf: Map<BrakeApplication, number>
): (corner: number | null) => number | null {
	const all: number[] = [];
	const byCorner = new Map<number, number[]>();
	for (const application of applications) {
		const steepest = steepestRise(brake, application);
		if (!(steepest > 0)) continue;
		all.push(steepest);
		const corner = cornerOf.get(application);
		if (corner === undefined) continue;
		const held = byCorner.get(corner);
		if (held) held.push(steepest);
		else byCorner.set(corner, [steepest]);
	}
	const ofRun = quantile(all);
	const ofCorner = new Map([...byCorner].map(([corner, slopes]) => [corner, quantile(slopes)]));
	return (corner) => (corner === null ? null : ofCorner.get(corner)) ?? ofRun;
}

/** Slope of the quickest lifts of a run, % per s; null where a foot never moved quickly from one sample to the next. */
export function quickestFall({ timeS, values }: Signal): number | null {
	const slopes: number[] = [];
	for (let i = 1; i < values.length && slopes.length < MOST_STEPS; i++) {
		const fall = values[i - 1] - values[i];
		if (fall > QUICK_STEP_PCT) slopes.push(fall / (timeS[i] - timeS[i - 1]));
	}
	return quantile(slopes);
}

/** Steepest rise from sample to sample up to the peak, as a share of the peak per s. */
function steepestRise({ timeS, values }: Signal, { onsetIndex, offIndex }: BrakeApplication): number {
	if (onsetIndex < 0) return 0;
	let peak = 0;
	let peakIndex = onsetIndex;
	for (let i = onsetIndex; i <= offIndex; i++) {
		if (values[i] > peak) {
			peak = values[i];
			peakIndex = i;
		}
	}
	let steepest = 0;
	for (let i = onsetIndex; i < peakIndex; i++) {
		steepest = Math.max(steepest, (values[i + 1] - values[i]) / (timeS[i + 1] - timeS[i]));
	}
	return steepest / peak;
}

function quantile(slopes: number[]): number | null {
	if (slopes.length < 3) return null;
	return Float64Array.from(slopes).sort()[Math.round(QUANTILE * (slopes.length - 1))];
}
