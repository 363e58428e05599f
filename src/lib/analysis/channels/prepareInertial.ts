import type { Warning } from '../../schemas/analysisDocument.ts';
import type { RawRun } from '../../parse/rawRun.ts';
import { KMH_PER_MPS, MPS2_PER_G, RAD_PER_DEG } from '../../units.ts';
import type { Positions } from './preparePositions.ts';
import { takeColumn } from './takeColumn.ts';
import { relate, turningFromPath } from './turning.ts';

export interface Inertial {
	accLongMps2: Float64Array | null;
	accLatMps2: Float64Array | null;
	yawRateRadps: Float64Array | null;
	steeringDeg: Float64Array | null;
	warnings: Warning[];
}

/** Below this correlation a sign is not read out of two channels. */
const MIN_CORRELATION = 0.4;

/**
 * Accelerations, yaw rate and steering with the house's signs: forward and left positive.
 *
 * The sign of the longitudinal acceleration comes from the change of speed; of yaw rate, lateral acceleration and steering from the turning of
 * the path (positions, else heading), else from each other, yaw rate first. A scale that is off by g or by degrees is put right.
 */
export function prepareInertial(raw: RawRun, speedKmh: Float64Array, positions: Positions | null): Inertial {
	const { timeS, columns } = raw;
	const take = (column: Float64Array | Float32Array | undefined) => (column ? takeColumn(column, timeS).values : null);
	const warnings: Warning[] = [];
	const accLongMps2 = take(columns.accLong);
	const accLatMps2 = take(columns.accLat);
	const yawRateRadps = take(columns.yawRate);
	const steeringDeg = take(columns.steering);
	if (accLongMps2) alignLongitudinal(accLongMps2, speedKmh, timeS, warnings);
	let turning = turningFromPath(positions, columns.heading, speedKmh, timeS);
	const everySample = Int32Array.from({ length: Math.ceil(timeS.length / 4) }, (_, i) => i * 4).filter(
		(i) => speedKmh[i] > 25
	);
	if (yawRateRadps) {
		if (turning) {
			const { correlation, factor } = relate(turning.radps, at(yawRateRadps, turning.indices));
			if (correlation < -MIN_CORRELATION) scale(yawRateRadps, -1);
			if (Math.abs(correlation) > 0.8)
				fixFactor(yawRateRadps, Math.abs(factor), 1 / RAD_PER_DEG, 'yaw rate', 'deg/s', warnings);
		} else turning = { indices: everySample, radps: at(yawRateRadps, everySample) };
	}
	if (accLatMps2) {
		if (turning) {
			const expected = Float64Array.from(
				turning.indices,
				(i, k) => ((turning?.radps[k] ?? NaN) * speedKmh[i]) / KMH_PER_MPS
			);
			const { correlation, factor } = relate(expected, at(accLatMps2, turning.indices));
			if (correlation < -MIN_CORRELATION) scale(accLatMps2, -1);
			if (Math.abs(correlation) > 0.8)
				fixFactor(accLatMps2, Math.abs(factor), 1 / MPS2_PER_G, 'lateral acceleration', 'g', warnings);
		} else turning = { indices: everySample, radps: at(accLatMps2, everySample) };
	}
	if (steeringDeg && turning) {
		const { correlation } = relate(turning.radps, at(steeringDeg, turning.indices));
		if (correlation < -MIN_CORRELATION) scale(steeringDeg, -1);
	}
	return { accLongMps2, accLatMps2, yawRateRadps, steeringDeg, warnings };
}

/** Turns the sign where braking reads positive; a factor near g or 1/g is a unit that was named wrongly. */
function alignLongitudinal(
	accLongMps2: Float64Array,
	speedKmh: Float64Array,
	timeS: Float64Array,
	warnings: Warning[]
): void {
	const rate = (timeS.length - 1) / (timeS[timeS.length - 1] - timeS[0]);
	const span = Math.max(1, Math.round(0.4 * rate));
	const stride = Math.max(1, Math.floor(timeS.length / 6000));
	const [expected, measured]: [number[], number[]] = [[], []];
	for (let i = span; i < timeS.length; i += stride) {
		const seconds = timeS[i] - timeS[i - span];
		let sum = 0;
		for (let k = i - span + 1; k <= i; k++)
			sum += ((accLongMps2[k] + accLongMps2[k - 1]) / 2) * (timeS[k] - timeS[k - 1]);
		if (seconds > 1.2) continue;
		expected.push((speedKmh[i] - speedKmh[i - span]) / KMH_PER_MPS / seconds);
		measured.push(sum / seconds);
	}
	const { correlation, factor } = relate(expected, measured);
	if (correlation < -MIN_CORRELATION) scale(accLongMps2, -1);
	if (Math.abs(correlation) > 0.8)
		fixFactor(accLongMps2, Math.abs(factor), 1 / MPS2_PER_G, 'longitudinal acceleration', 'g', warnings);
}

/** Where measured ≈ wrong · expected (or the inverse), the unit was taken for the other one. */
function fixFactor(
	values: Float64Array,
	factor: number,
	wrong: number,
	what: string,
	unit: string,
	warnings: Warning[]
): void {
	for (const [power, message] of [
		[wrong, `${what} was in ${unit}`],
		[1 / wrong, `${what} was not in ${unit}`]
	] as const) {
		if (Math.abs(Math.log(factor / power)) > 0.35) continue;
		scale(values, 1 / power);
		warnings.push({ code: 'unit_assumed', message: `${message}, as the car's motion shows`, row: null });
	}
}

function at(values: Float64Array, indices: Int32Array): Float64Array {
	return Float64Array.from(indices, (i) => values[i]);
}

function scale(values: Float64Array, factor: number): void {
	for (let i = 0; i < values.length; i++) values[i] *= factor;
}
