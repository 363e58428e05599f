import type { BrakeUnit } from '../schemas/channels.ts';
import type { Corner, LapKind, PathOrigin, SourceSummary, Warning, Wheel } from '../schemas/analysisDocument.ts';
import type { LapReason } from '../schemas/codes.ts';

/**
 * The shapes that pass between the stages of the core, in the order in which they arise:
 * RawRun (parse) → Channels → Lap[] → ReferencePath → PlacedRun → Corner[] → LapGrid, metrics → comparison.
 */

/**
 * Channels of a run, ready to measure: speed always there, pedals from rest in % of full, local metres for positions.
 * Columns have equal length ≥ 2; `timeS` strictly increases; missing is NaN; an absent channel is null.
 */
export interface Channels {
	timeS: Float64Array;
	/** never null: measured, or from distance or positions (see warnings) */
	speedKmh: Float64Array;
	/** along the run, never restarting; measured, or integrated from speed by trapezoids */
	distanceM: Float64Array;
	/** was distance measured (true) or integrated from speed (false) */
	distanceMeasured: boolean;
	/** % of full pedal or of full pressure, rest taken off; null where there is no brake channel */
	brakePct: Float64Array | null;
	brakeUnit: BrakeUnit | null;
	/** what 100 % stands for in `brakeUnit` (bar, N, counts); null for % and switch */
	brakeFull: number | null;
	/** true where the full value was taken from the run itself (warning `brake_scale_assumed`) */
	brakeScaleAssumed: boolean;
	throttlePct: Float64Array | null;
	/** degrees at the wheel, left positive */
	steeringDeg: Float64Array | null;
	gear: Float64Array | null;
	engineSpeedRpm: Float64Array | null;
	/** local metres, x east, y north, about `origin` */
	xM: Float64Array | null;
	yM: Float64Array | null;
	/** WGS84 of the local frame's origin; null where the file has x, y */
	origin: { latitudeDeg: number; longitudeDeg: number } | null;
	/** forward positive */
	accLongMps2: Float64Array | null;
	/** left positive */
	accLatMps2: Float64Array | null;
	/** counter-clockwise positive */
	yawRateRadps: Float64Array | null;
	/** speed at the tread, rolling radius fitted */
	wheelKmh: Record<Wheel, Float64Array> | null;
	/** lap marks as in the file */
	lapColumn: Float64Array | null;
	beacon: Float64Array | null;
	lapDistanceM: Float64Array | null;
	/** running lap time of the file, which restarts */
	lapTimeColumnS: Float64Array | null;
	sampleRateHz: number;
	source: SourceSummary;
	warnings: Warning[];
}

/** One lap between two crossings of the line; crossings are interpolated, so startS and endS lie between samples. */
export interface Lap {
	number: number;
	kind: LapKind;
	startS: number;
	endS: number;
	lengthM: number | null;
	clean: boolean;
	reasons: LapReason[];
	/** ± of the lap time where only a lap column is known */
	plusMinusS: number;
	/** which whole turn of the path the lap covers: place from index · L to (index + 1) · L; null for a lap that starts or ends off the line */
	turn: number | null;
}

/** The layout's reference path on a 1 m grid; entry i is at s = i m, the last entry is followed by the first. */
export interface ReferencePath {
	lengthM: number;
	closed: boolean;
	/** length n = floor(lengthM) + 1 for stored places 0 … floor(lengthM) */
	xM: Float64Array;
	yM: Float64Array;
	/** left positive */
	curvaturePerM: Float64Array;
	origin: PathOrigin;
	line: 'mark' | 'layout' | 'chosen';
	/** speed of the lap that the path stands on, by place: used to match laps without positions */
	speedKmh: Float64Array;
	/**
	 * the file's own distance along the track at each whole metre, where it has one (simulators count along the centre line): another
	 * run that counts the same way is laid by it. Absent or null: by projection
	 */
	trackDistanceM?: Float64Array | null;
	/** local frame, as in Channels */
	frame: { latitudeDeg: number; longitudeDeg: number } | null;
}

/**
 * A run laid on a path: `placeM` is the unwrapped place, turn · L + s, non-decreasing, so that a lap is the stretch
 * [turn · L, (turn + 1) · L] and a corner that the line cuts is measured without a seam. Samples before the first lap have
 * places below 0. NaN where the car is off the path for good.
 */
export interface PlacedRun {
	channels: Channels;
	placeM: Float64Array;
	/** signed distance from the path, left positive; null without positions */
	offsetM: Float64Array | null;
	/** curvature of the car's own line at each sample, left positive; null where it cannot be known */
	curvaturePerM: Float64Array | null;
	laps: Lap[];
	path: ReferencePath;
}

/** Everything that depends on the layout alone: what two laps are compared on. */
export interface CornerMap {
	lengthM: number;
	corners: Corner[];
}

/**
 * One lap on the path's 1 m grid, with a margin before and after the line; entry i is at s = i − marginM.
 * NaN where the run has no sample. Drawn, stored and compared; corner metrics never come from it.
 */
export interface LapGrid {
	lapNumber: number;
	lengthM: number;
	marginM: number;
	/** line to line, exact: the time at s = lengthM, which is rarely a whole metre */
	lapTimeS: number;
	/** s from the lap's crossing of the line; negative in the margin before */
	timeS: Float64Array;
	speedKmh: Float64Array;
	brakePct: Float64Array | null;
	throttlePct: Float64Array | null;
	steeringDeg: Float64Array | null;
	/** signed distance from the path, left positive */
	offsetM: Float64Array | null;
	curvaturePerM: Float64Array | null;
	accLongMps2: Float64Array | null;
	gear: Float64Array | null;
	engineSpeedRpm: Float64Array | null;
}
