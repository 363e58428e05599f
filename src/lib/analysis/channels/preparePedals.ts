import type { Warning } from '../../schemas/analysisDocument.ts';
import type { BrakeUnit } from '../../schemas/channels.ts';
import type { RawRun } from '../../parse/rawRun.ts';
import { gainsMps2 } from './gains.ts';
import { percentile, shareOf } from './percentile.ts';
import { takeColumn } from './takeColumn.ts';

export interface Pedals {
	brakePct: Float64Array | null;
	brakeUnit: BrakeUnit | null;
	brakeFull: number | null;
	brakeScaleAssumed: boolean;
	throttlePct: Float64Array | null;
	warnings: Warning[];
}

/** Half the span over which a gain of speed is taken, s. */
const GAIN_HALF_SPAN_S = 0.2;
/** A rest level closer to zero than this (%) is noise. */
const REST_TOLERANCE_PCT = 0.5;
/** A pedal whose range stays under this (%) was not used or is not connected. */
const DEAD_RANGE_PCT = 1;
/** Deceleration (m/s²) that no car reaches without its brakes for long. */
const BRAKING_MPS2 = 4;
/** A level below this is a driver who never opened fully, however long he stayed there. */
const LEAST_FULL_PCT = 90;
/** Share of samples at one level that makes it a stop of the pedal and not a driver's choice. */
const PLATEAU_SHARE = 0.03;

/**
 * Brake and throttle in % from rest.
 *
 * A percentage stays one, its rest level taken off; a pressure, a force or counts are set against the full value: the car's, or the 99.5th
 * percentile of the run's braking samples (warning `brake_scale_assumed`); a switch is 0 or 100. Throttle is turned where it reads the wrong way
 * round and scaled to its own rest and full levels where it has such.
 *
 * @param brakeFull full value of the car in the brake's unit, from rest
 */
export function preparePedals(raw: RawRun, speedKmh: Float64Array, brakeFull: number | null): Pedals {
	const warnings: Warning[] = [];
	const gainMps2 = gainsMps2(speedKmh, raw.timeS, GAIN_HALF_SPAN_S);
	const brake = raw.columns.brake ?? raw.columns.brakeRear;
	const throttle = prepareThrottle(raw, gainMps2, warnings);
	const pedals: Pedals = {
		brakePct: null,
		brakeUnit: null,
		brakeFull: null,
		brakeScaleAssumed: false,
		throttlePct: throttle,
		warnings
	};
	if (!brake || !raw.brakeUnit) return pedals;
	const values = raw.brakeUnit === 'switch' ? new Float64Array(brake) : takeColumn(brake, raw.timeS).values;
	pedals.brakeUnit = raw.brakeUnit;
	if (raw.brakeUnit === 'switch') {
		for (let i = 0; i < values.length; i++) values[i] *= 100;
		warnings.push({
			code: 'brake_switch_only',
			message: 'the brake is a switch: onset and end are known, pressure is not',
			row: null
		});
		return { ...pedals, brakePct: values };
	}
	const range = percentile(values, 1) - percentile(values, 0);
	if (!(range > (raw.brakeUnit === 'pct' ? DEAD_RANGE_PCT : 0))) {
		if (shareOf(gainMps2, (gain) => gain < -BRAKING_MPS2) > 0.01) {
			warnings.push({
				code: 'frozen_channel',
				message: 'the brake never moves although the car brakes; the channel was left out',
				row: null
			});
			return { ...pedals, brakeUnit: null };
		}
		return { ...pedals, brakePct: values.fill(0) };
	}
	if (raw.brakeUnit === 'raw') turnWhereInverted(values, gainMps2);
	const rest = restLevel(values, throttle);
	if (raw.brakeUnit === 'pct') {
		if (Math.abs(rest) > REST_TOLERANCE_PCT) {
			warnings.push({
				code: 'brake_offset_removed',
				message: `the brake rests at ${rest.toFixed(1)} %, which was taken off`,
				row: null
			});
			for (let i = 0; i < values.length; i++) values[i] = ((values[i] - rest) / (100 - rest)) * 100;
		}
		return { ...pedals, brakePct: values };
	}
	for (let i = 0; i < values.length; i++) values[i] -= rest;
	if (Math.abs(rest) > 0.005 * range) {
		warnings.push({
			code: 'brake_offset_removed',
			message: `the brake rests at ${round(rest)}, which was taken off`,
			row: null
		});
	}
	const top = percentile(values, 0.999);
	const full = brakeFull ?? percentile(values, 0.995, (i) => values[i] > 0.05 * top);
	if (brakeFull === null) {
		warnings.push({
			code: 'brake_scale_assumed',
			message: `no full value of the brake is known; ${round(full)} of this run stands for 100 %`,
			row: null
		});
	}
	for (let i = 0; i < values.length; i++) values[i] = (values[i] / full) * 100;
	return { ...pedals, brakePct: values, brakeFull: full, brakeScaleAssumed: brakeFull === null };
}

/** Median of the brake while the throttle is fully open; without a throttle the level that the pedal is at most of the time. */
function restLevel(values: Float64Array, throttlePct: Float64Array | null): number {
	if (throttlePct && shareOf(throttlePct, (throttle) => throttle > 95) > 0.02) {
		return percentile(values, 0.5, (i) => throttlePct[i] > 95);
	}
	return percentile(values, 0.2);
}

/** Counts that fall when the pedal is pressed: high while the car gains speed, low while it brakes hard. */
function turnWhereInverted(values: Float64Array, gainMps2: Float64Array): void {
	const braking = percentile(values, 0.5, (i) => gainMps2[i] < -BRAKING_MPS2);
	const gaining = percentile(values, 0.5, (i) => gainMps2[i] > 0.5);
	if (braking < gaining) for (let i = 0; i < values.length; i++) values[i] = -values[i];
}

function prepareThrottle(raw: RawRun, gainMps2: Float64Array, warnings: Warning[]): Float64Array | null {
	if (!raw.columns.throttle) return null;
	const throttle = takeColumn(raw.columns.throttle, raw.timeS).values;
	const [low, high] = [percentile(throttle, 0.001), percentile(throttle, 0.999)];
	if (!(high - low > DEAD_RANGE_PCT)) {
		warnings.push({ code: 'frozen_channel', message: 'the throttle never moves; the channel was left out', row: null });
		return null;
	}
	const braking = percentile(throttle, 0.5, (i) => gainMps2[i] < -BRAKING_MPS2);
	const gaining = percentile(throttle, 0.75, (i) => gainMps2[i] > 0.5);
	const gainingLow = percentile(throttle, 0.25, (i) => gainMps2[i] > 0.5);
	// Wide open under braking and shut while gaining speed: the channel reads the other way round.
	if (braking > low + 0.7 * (high - low) && gainingLow < low + 0.3 * (high - low) && gaining < braking + 1e-9) {
		const sum = low + high > 90 && low + high < 110 ? 100 : low + high;
		for (let i = 0; i < throttle.length; i++) throttle[i] = sum - throttle[i];
		warnings.push({
			code: 'throttle_inverted',
			message: 'the throttle is shut where it reads 100 %; it was turned round',
			row: null
		});
	}
	return scaleThrottle(throttle, gainMps2, warnings);
}

/** Idle at 8 % and full at 97 % become 0 and 100, where the pedal demonstrably rests at these levels. */
function scaleThrottle(throttle: Float64Array, gainMps2: Float64Array, warnings: Warning[]): Float64Array {
	let rest = percentile(throttle, 0.5, (i) => gainMps2[i] < -BRAKING_MPS2);
	if (!Number.isFinite(rest)) rest = percentile(throttle, 0.02);
	const low = percentile(throttle, 0.005);
	if (rest > low + 5 || rest > 25) rest = low;
	let full = percentile(throttle, 0.998);
	const isStop = full >= LEAST_FULL_PCT && shareOf(throttle, (value) => Math.abs(value - full) <= 1) >= PLATEAU_SHARE;
	if (!isStop) full = 100;
	const needed = Math.abs(rest) > REST_TOLERANCE_PCT || Math.abs(full - 100) > REST_TOLERANCE_PCT;
	if (needed) {
		warnings.push({
			code: 'throttle_scaled',
			message: `the throttle rests at ${rest.toFixed(1)} % and is fully open at ${full.toFixed(1)} %; it was scaled to 0 and 100`,
			row: null
		});
	} else [rest, full] = [0, 100];
	for (let i = 0; i < throttle.length; i++)
		throttle[i] = Math.min(100, Math.max(0, ((throttle[i] - rest) / (full - rest)) * 100));
	return throttle;
}

function round(value: number): string {
	return Math.abs(value) >= 100 ? value.toFixed(0) : value.toFixed(2);
}
