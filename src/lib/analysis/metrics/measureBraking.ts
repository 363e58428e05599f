import { HOLE_S, offLevelPct, ONSET_PCT, type BrakeApplication } from './brakeApplications.ts';
import { crossing, type Moment, type Signal } from './crossing.ts';
import { fallingCrossing } from './fallingCrossing.ts';
import { heldLevel } from './heldLevel.ts';
import { levelStretches, type LevelStretch } from './levelStretches.ts';
import { isProgressive } from './isProgressive.ts';

/** What one application of the brake was, in times of the run. */
export interface Braking {
	application: BrakeApplication;
	/** first crossing of 5 %; null where it lies in a hole of the recording */
	onset: Moment | null;
	/** when the brake left its off level, just before the onset */
	leavesRestS: number;
	/** null where the recording ends, or has a hole, under braking */
	off: Moment | null;
	/** level held for 0.05 s */
	peakPct: number;
	peakRawPct: number;
	/** first reached, to within 2 % of it */
	peakS: number;
	riseS: number | null;
	releaseStartS: number;
	releaseProgressive: boolean | null;
	dabs: number;
	/** levels of 2–12 % after the peak */
	lightHolds: LevelStretch[];
	/** levels of 2–25 % after the peak: a hold that is too strong to be a light one is among them */
	holds: LevelStretch[];
	/** first and last moment with more than 80 % of the peak */
	heldS: [number, number];
}

const PEAK_HELD_S = 0.05;
/** Domain, release: the last level above half of the peak … */
const RELEASE_LEVEL_SHARE = 0.5;
/** … is one whose slope stays under this share of the peak per s … */
const RELEASE_SLOPE_SHARE = 0.2;
/** … for this long. */
const RELEASE_LEVEL_S = 0.3;
const RISE_TO_SHARE = 0.9;
const PEAK_REACHED_SHARE = 0.98;
const HOLD = { low: 2, high: 12, steepest: 15, leastS: 0.2 };
/** A level above this is braking on, no hold that lets the car rotate. */
const STRONGEST_HOLD_PCT = 25;
/** Above this share of its peak a braking is at full strength. */
const HELD_SHARE = 0.8;
/** A pulse or dab is a fall and a new rise of at least this share of the peak, and at least that much. */
const DAB_SHARE = 0.2;
const DAB_LEAST_PCT = 10;
/** From so many dabs on a stroke is pulsed, by a system or by a foot. */
const PULSED_DABS = 3;
/** Pulses this close to each other are one pressure to the wheels. */
const PULSE_GAP_S = 0.1;

/**
 * Measures one application of the brake.
 *
 * @param brake   % of full pedal from rest
 * @param application  where it lies
 * @param sampleS  sampling interval
 * @param quickest  slopes of the quickest strokes seen at this corner, share of the peak per s; null where unknown
 */
export function measureBraking(
	brake: Signal,
	application: BrakeApplication,
	sampleS: number,
	quickest: { rise: number | null; fall: number | null } = { rise: null, fall: null }
): Braking {
	const { timeS, values, noise } = brake;
	const offPct = offLevelPct(noise);
	const first = application.onsetIndex + 1;
	const last = application.offIndex;
	const dabs = countDabs(values, first, last, noise);
	const { pct: peakPct, rawPct: peakRawPct } = peakOf(brake, first, last, sampleS, dabs);
	const rise = quickest.rise === null ? null : quickest.rise * peakPct;
	const fall = quickest.fall === null ? null : quickest.fall * peakPct;

	const opens = application.onsetIndex >= 0 && timeS[first] - timeS[first - 1] <= HOLE_S;
	const onset = opens ? crossing(brake, application.onsetIndex, Math.max(ONSET_PCT, offPct), rise) : null;
	let rest = application.onsetIndex;
	while (rest > 0 && values[rest] >= offPct) rest--;
	const leavesRestS = opens && values[rest] < offPct ? crossing(brake, rest, offPct, rise).timeS : timeS[first];

	const closes = application.released && last + 1 < timeS.length;
	const off = closes ? fallingCrossing(brake, last, offPct, fall) : null;
	const endS = off?.timeS ?? timeS[last];

	const peakS = firstReached(brake, first, last, PEAK_REACHED_SHARE * peakPct, rise);
	const risenS = firstReached(brake, first, last, RISE_TO_SHARE * peakPct, rise);
	const releaseStartS = startOfRelease(brake, first, last, peakPct, sampleS);
	const afterPeak = indexAfter(timeS, first, last, peakS);
	const levels = (high: number) =>
		levelStretches(brake, afterPeak, Math.min(last + 1, timeS.length - 1), { ...HOLD, high, sampleS });
	return {
		application,
		onset,
		leavesRestS,
		off,
		peakPct,
		peakRawPct,
		peakS,
		riseS: onset ? Math.max(0, risenS - onset.timeS) : null,
		releaseStartS,
		releaseProgressive: off ? isProgressive(brake, releaseStartS, endS, peakPct) : null,
		dabs,
		lightHolds: levels(HOLD.high),
		holds: levels(STRONGEST_HOLD_PCT),
		heldS: [peakS, lastAbove(brake, first, last, HELD_SHARE * peakPct)]
	};
}

/**
 * Falls and new rises within an application.
 *
 * @returns 0 for one clean stroke
 */
function countDabs(values: Float64Array, first: number, last: number, noise: number): number {
	let highest = 0;
	for (let i = first; i <= last; i++) if (values[i] > highest) highest = values[i];
	const least = Math.max(DAB_LEAST_PCT, DAB_SHARE * highest, 6 * noise);
	let dabs = 0;
	let turn = values[first];
	let rising = true;
	for (let i = first; i <= last; i++) {
		const value = values[i];
		if (rising ? value > turn : value < turn) turn = value;
		else if (rising && value < turn - least) {
			rising = false;
			turn = value;
		} else if (!rising && value > turn + least) {
			rising = true;
			turn = value;
			dabs++;
		}
	}
	return dabs;
}

/** The peak of a stroke is the level held; of a pulsed one, the level that its pulses reach, their gaps closed. */
function peakOf(brake: Signal, first: number, last: number, sampleS: number, dabs: number) {
	const pct = heldLevel(brake, first, last, PEAK_HELD_S, sampleS);
	let rawPct = 0;
	for (let i = first; i <= last; i++) if (brake.values[i] > rawPct) rawPct = brake.values[i];
	if (dabs < PULSED_DABS) return { pct, rawPct };
	const closed = brake.values.slice(first, last + 1);
	const timeS = brake.timeS.subarray(first, last + 1);
	closeGaps(timeS, closed);
	return { pct: heldLevel({ timeS, values: closed, noise: 0 }, 0, closed.length - 1, PEAK_HELD_S, sampleS), rawPct };
}

/** Lifts every dip that is shorter than the pulse gap to the lower of its two shoulders (a morphological closing). */
function closeGaps(timeS: Float64Array, values: Float64Array): void {
	const original = values.slice();
	for (let i = 0; i < values.length; i++) {
		let left = original[i];
		for (let k = i - 1; k >= 0 && timeS[i] - timeS[k] < PULSE_GAP_S; k--) {
			if (original[k] > left) left = original[k];
			let right = original[i];
			for (let m = i + 1; m < values.length && timeS[m] - timeS[k] <= PULSE_GAP_S; m++) {
				if (original[m] > right) right = original[m];
			}
			values[i] = Math.max(values[i], Math.min(left, right));
		}
	}
}

function firstReached(brake: Signal, first: number, last: number, level: number, quickest: number | null): number {
	const { timeS, values } = brake;
	for (let i = first; i <= last; i++) {
		if (values[i] >= level)
			return i > 0 && values[i - 1] < level ? crossing(brake, i - 1, level, quickest).timeS : timeS[i];
	}
	return timeS[first];
}

function startOfRelease(brake: Signal, first: number, last: number, peakPct: number, sampleS: number): number {
	const { timeS, values } = brake;
	const levels = levelStretches(brake, first, last, {
		low: RELEASE_LEVEL_SHARE * peakPct,
		high: Infinity,
		steepest: RELEASE_SLOPE_SHARE * peakPct,
		leastS: RELEASE_LEVEL_S,
		sampleS
	});
	const level = levels.at(-1);
	if (level) return level.endS;
	for (let i = last; i >= first; i--) {
		if (values[i] >= RISE_TO_SHARE * peakPct) {
			return i + 1 < values.length && values[i + 1] < RISE_TO_SHARE * peakPct
				? crossing(brake, i, RISE_TO_SHARE * peakPct).timeS
				: timeS[i];
		}
	}
	return timeS[first];
}

function lastAbove({ timeS, values }: Signal, first: number, last: number, level: number): number {
	for (let i = last; i >= first; i--) if (values[i] >= level) return timeS[i];
	return timeS[first];
}

function indexAfter(timeS: Float64Array, first: number, last: number, atS: number): number {
	let i = first;
	while (i < last && timeS[i] < atS) i++;
	return i;
}
