import type { Signal } from './crossing.ts';

/** Domain: an application begins at rest + 5 %. */
export const ONSET_PCT = 5;
/** Domain: off is below rest + max(2 %, 3 noise s.d.) for this long. */
const OFF_FOR_S = 0.1;
const OFF_PCT = 2;
const OFF_NOISE_SD = 3;
/** Domain: applications closer than this, with no acceleration between, are one. */
const MERGE_UNDER_S = 0.5;
/** Speed may rise by this much between two pulses without the driver having accelerated: a kerb, a sensor's step. */
const RISE_KMH = 0.5;
/** A longer step between two samples is a hole in the recording: it ends an application, for what happened in it is not known. */
export const HOLE_S = 0.5;

/** One braking, by samples; its moments are measured from them. */
export interface BrakeApplication {
	/** the onset lies between this sample and the next; −1 where the recording begins under braking */
	onsetIndex: number;
	/** last sample at or above the off level; the off lies between it and the next */
	offIndex: number;
	/** false where the recording, or a hole in it, ends under braking */
	released: boolean;
	/** pulses and dabs that were merged into it, over the first */
	merged: number;
	/** ∫ brake dt, % s */
	impulsePctS: number;
	/** half of the impulse has passed */
	halfImpulseS: number;
}

/** The level below which the brake counts as off, in % from rest. */
export function offLevelPct(noisePct: number): number {
	return Math.max(OFF_PCT, OFF_NOISE_SD * noisePct);
}

/**
 * Every braking of a run. One pass over the samples.
 *
 * @param brake    % of full pedal from rest
 * @param speedKmh the run's speed, which tells two dabs from two brakings
 * @param speedNoiseKmh s.d. of the speed
 */
export function brakeApplications(brake: Signal, speedKmh: Float64Array, speedNoiseKmh: number): BrakeApplication[] {
	const { timeS } = brake;
	const merged: BrakeApplication[] = [];
	for (const next of separateApplications(brake)) {
		const last = merged.at(-1);
		const gapS = last ? timeS[next.onsetIndex + 1] - timeS[last.offIndex] : Infinity;
		const joins =
			last?.released &&
			gapS < MERGE_UNDER_S &&
			speedKmh[Math.max(next.onsetIndex, 0)] <= speedKmh[last.offIndex] + Math.max(RISE_KMH, 4 * speedNoiseKmh);
		if (last && joins) {
			last.offIndex = next.offIndex;
			last.released = next.released;
			last.merged += 1;
		} else {
			merged.push(next);
		}
	}
	for (const application of merged) weigh(brake, application);
	return merged;
}

function separateApplications({ timeS, values, noise }: Signal): BrakeApplication[] {
	const off = offLevelPct(noise);
	const onset = Math.max(ONSET_PCT, off);
	const found: BrakeApplication[] = [];
	let current: BrakeApplication | null = null;
	for (let i = 0; i < values.length; i++) {
		const value = values[i];
		if (!current) {
			if (!(value >= onset)) continue;
			current = { onsetIndex: i - 1, offIndex: i, released: false, merged: 0, impulsePctS: 0, halfImpulseS: NaN };
			found.push(current);
		} else if (Number.isNaN(value) || timeS[i] - timeS[i - 1] > HOLE_S) {
			// the sample after a hole may open a new one
			current = null;
			if (value >= onset) i--;
		} else if (value >= off) {
			current.offIndex = i;
		} else if (timeS[i] - timeS[current.offIndex] >= OFF_FOR_S - 1e-9) {
			current.released = true;
			current = null;
		}
	}
	return found;
}

function weigh({ timeS, values }: Signal, application: BrakeApplication): void {
	const from = Math.max(application.onsetIndex, 0);
	const to = Math.min(application.offIndex + 1, values.length - 1);
	let impulse = 0;
	for (let i = from; i < to; i++) impulse += stepImpulse(timeS, values, i);
	application.impulsePctS = impulse;
	let half = impulse / 2;
	application.halfImpulseS = timeS[to];
	for (let i = from; i < to; i++) {
		const step = stepImpulse(timeS, values, i);
		if (step >= half) {
			application.halfImpulseS = timeS[i] + (half / step) * (timeS[i + 1] - timeS[i]);
			break;
		}
		half -= step;
	}
}

function stepImpulse(timeS: Float64Array, values: Float64Array, i: number): number {
	const step = ((values[i] + values[i + 1]) / 2) * (timeS[i + 1] - timeS[i]);
	return step > 0 ? step : 0;
}
