import type { Wheel } from '../../schemas/analysisDocument.ts';
import { KMH_PER_MPS } from '../../units.ts';
import type { Channels } from '../model.ts';
import { fitWheels, WHEELS } from './wheelFit.ts';

const BRAKING_PCT = 2;
/** Without a brake channel, slowing by more than this is braking. */
const BRAKED_MPS2 = 4;

/** How much slower or faster each wheel turns than the ground passes under it. */
export interface WheelSlips {
	/** wheels with a usable channel */
	wheels: readonly Wheel[];
	/** (v_wheel − v)/v at a sample, v taken at that wheel; NaN where not known */
	slipAt(wheel: Wheel, i: number): number;
	isBraking(i: number): boolean;
}

/** Slips by run: locks and wheelspin ask for the same ones. */
const known = new WeakMap<Channels, WheelSlips | null>();

/**
 * Slip of every wheel of a run, longitudinal slip by ISO 8855.
 *
 * v is the ground's speed at that wheel: left wheels are slower in a left turn by yaw rate × half of the track. Rolling radii, track and the
 * lag between the clocks of wheels and speed are fitted, once for a run.
 *
 * @param channels the run; `wheelKmh` may be off by a constant factor per wheel
 * @param curvaturePerM of the car's own line, where known: stands in for a missing yaw rate
 * @returns null without wheel speeds, or where the run never rolls
 */
export function wheelSlips(channels: Channels, curvaturePerM: Float64Array | null): WheelSlips | null {
	const found = known.get(channels);
	if (found !== undefined) return found;
	const slips = fitSlips(channels, curvaturePerM);
	known.set(channels, slips);
	return slips;
}

function fitSlips(channels: Channels, curvaturePerM: Float64Array | null): WheelSlips | null {
	const { wheelKmh, timeS, speedKmh, brakePct, sampleRateHz } = channels;
	if (!wheelKmh) return null;
	const yawRateRadps = channels.yawRateRadps ?? yawRate(speedKmh, curvaturePerM);
	const isBraking = brakePct
		? (i: number) => brakePct[i] > BRAKING_PCT
		: (i: number) => i > 0 && (speedKmh[i - 1] - speedKmh[i]) / KMH_PER_MPS > BRAKED_MPS2 * (timeS[i] - timeS[i - 1]);
	const fit = fitWheels({ timeS, speedKmh, wheelKmh, yawRateRadps, sampleRateHz }, isBraking);
	if (!fit) return null;
	const lag = fit.lagS * sampleRateHz;
	const whole = Math.floor(lag);
	const part = lag - whole;
	return {
		wheels: WHEELS.filter((wheel) => fit.scale[wheel] > 0),
		isBraking,
		slipAt(wheel, i) {
			const values = wheelKmh[wheel];
			const a = i + whole;
			if (!(a >= 0 && a + 1 < values.length)) return NaN;
			const side = ((wheel === 'fl' || wheel === 'rl' ? -1 : 1) * fit.trackM * KMH_PER_MPS) / 2;
			const wheelSpeed = (values[a] + (part > 0 ? part * (values[a + 1] - values[a]) : 0)) * fit.scale[wheel];
			const ground = speedKmh[i] + (yawRateRadps ? side * yawRateRadps[i] : 0);
			return (wheelSpeed - ground) / ground;
		}
	};
}

function yawRate(speedKmh: Float64Array, curvaturePerM: Float64Array | null): Float64Array | null {
	return curvaturePerM && curvaturePerM.map((curvature, i) => (curvature * speedKmh[i]) / KMH_PER_MPS);
}
