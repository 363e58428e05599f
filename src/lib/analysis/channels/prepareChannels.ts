import type { RawRun } from '../../parse/rawRun.ts';
import type { Warning } from '../../schemas/analysisDocument.ts';
import type { Channels } from '../model.ts';
import { holdValues } from './fillGaps.ts';
import { percentile } from './percentile.ts';
import { prepareInertial } from './prepareInertial.ts';
import { prepareMotion } from './prepareMotion.ts';
import { preparePedals } from './preparePedals.ts';
import { preparePositions } from './preparePositions.ts';
import { prepareWheels } from './prepareWheels.ts';

export interface PrepareOptions {
	/** brake at full pedal, above rest, in the brake's unit (bar, N, counts), set for the car; null or absent: taken from the run */
	brakeFull?: number | null;
}

/** A pause in the samples longer than this is a drop-out (s). */
const DROP_OUT_S = 0.5;
/** Steps that differ from the usual one by more than this share, in more than one of twenty samples, are said. */
const JITTER_SHARE = 0.3;

/**
 * Makes a recording ready to measure: speed and distance always there, pedals from rest in %, positions in local metres, signs as the house has
 * them (forward, left positive), wheel speeds at the tread. Definitions: the method page, "Channels".
 *
 * Pure; columns of the result are new. What the file lacks stays null; what had to be assumed or left out is in `warnings`.
 *
 * @param raw as the parser gives it
 */
export function prepareChannels(raw: RawRun, options: PrepareOptions = {}): Channels {
	const { timeS, columns } = raw;
	const stepS = usualStep(timeS);
	const positions = preparePositions(raw);
	const motion = prepareMotion(raw, positions, stepS);
	const pedals = preparePedals(raw, motion.speedKmh, options.brakeFull ?? null);
	const inertial = prepareInertial(raw, motion.speedKmh, positions);
	const warnings = [
		...raw.source.warnings,
		...timeWarnings(raw, stepS),
		...(positions?.warnings ?? []),
		...motion.warnings,
		...pedals.warnings,
		...inertial.warnings
	];
	return {
		timeS: new Float64Array(timeS),
		speedKmh: motion.speedKmh,
		distanceM: motion.distanceM,
		distanceMeasured: motion.distanceMeasured,
		brakePct: pedals.brakePct,
		brakeUnit: pedals.brakeUnit,
		brakeFull: pedals.brakeFull,
		brakeScaleAssumed: pedals.brakeScaleAssumed,
		throttlePct: pedals.throttlePct,
		steeringDeg: inertial.steeringDeg,
		gear: held(columns.gear),
		engineSpeedRpm: copy(columns.engineSpeed),
		xM: positions?.xM ?? null,
		yM: positions?.yM ?? null,
		origin: positions?.origin ?? null,
		accLongMps2: inertial.accLongMps2,
		accLatMps2: inertial.accLatMps2,
		yawRateRadps: inertial.yawRateRadps,
		wheelKmh: prepareWheels(raw, motion.speedKmh),
		lapColumn: held(columns.lap),
		beacon: copy(columns.beacon),
		lapDistanceM: copy(columns.lapDistance),
		lapTimeColumnS: copy(columns.lapTime),
		sampleRateHz: 1 / stepS,
		source: raw.source,
		warnings
	};
}

/** Mean of the steps near the median one: stamps rounded to a millisecond make the median itself a rounded one. */
function usualStep(timeS: Float64Array): number {
	const steps = new Float64Array(timeS.length - 1);
	for (let i = 1; i < timeS.length; i++) steps[i - 1] = timeS[i] - timeS[i - 1];
	const median = percentile(steps, 0.5);
	let [sum, count] = [0, 0];
	for (const step of steps) {
		if (Math.abs(step - median) > JITTER_SHARE * median) continue;
		sum += step;
		count++;
	}
	return sum / count;
}

function timeWarnings(raw: RawRun, stepS: number): Warning[] {
	const { timeS, fileRow } = raw;
	const warnings: Warning[] = [];
	let [uneven, gaps, first, longest] = [0, 0, -1, 0];
	for (let i = 1; i < timeS.length; i++) {
		const step = timeS[i] - timeS[i - 1];
		if (step > DROP_OUT_S && step > 3 * stepS) {
			gaps++;
			if (first < 0) first = i;
			longest = Math.max(longest, step);
		} else if (Math.abs(step - stepS) > JITTER_SHARE * stepS) uneven++;
	}
	if (gaps > 0) {
		const count = gaps === 1 ? 'a gap' : `${gaps} gaps, the longest`;
		warnings.push({
			code: 'gap',
			message: `the recording has ${count} of ${longest.toFixed(1)} s`,
			row: fileRow[first]
		});
	}
	if (uneven > 0.05 * timeS.length) {
		warnings.push({
			code: 'time_jitter',
			message: `samples come unevenly: ${Math.round((100 * uneven) / timeS.length)} % are off the usual step`,
			row: null
		});
	}
	return warnings;
}

function copy(column: ArrayLike<number> | undefined): Float64Array | null {
	return column ? new Float64Array(column) : null;
}

function held(column: ArrayLike<number> | undefined): Float64Array | null {
	const values = copy(column);
	if (values) holdValues(values);
	return values;
}
