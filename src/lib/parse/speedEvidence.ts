import { RAD_PER_DEG, KMH_PER_MPS } from '../units.ts';
import { unitById } from './columnUnits.ts';
import type { Unit } from './columnUnits.ts';
import type { Column, Columns } from './columns.ts';
import { quantile } from './columns.ts';

export interface SpeedEvidence {
	/** km/h that one unit of the speed column stands for */
	kmhPerUnit: number;
	source: string;
}

/** Longest step that still counts as one motion. */
const MAX_STEP_S = 1.5;
/** Within this of a unit's factor (as a ratio) it is that unit: slip, line and noise stay well below, the next unit is 12 % off. */
const TOLERANCE = 0.055;
const METRES_PER_DEGREE = 111_195;

/**
 * What the other columns say of the speed's unit: distance covered in the time, positions, or the change of speed against the
 * longitudinal acceleration. Null where nothing ties it to a unit.
 */
export function speedEvidence(
	columns: Columns,
	seconds: Float64Array,
	speed: Column,
	accelerationUnit: Unit | null
): SpeedEvidence | null {
	const travelled = columns.get('distance') ?? columns.get('lapDistance');
	if (travelled) {
		const ratio = ratioOfSums(seconds, speed, (i) => travelled[i] - travelled[i - 1]);
		if (ratio > 0) return { kmhPerUnit: ratio * KMH_PER_MPS, source: 'distance over time' };
	}
	const [latitude, longitude] = [columns.get('latitude'), columns.get('longitude')];
	if (latitude && longitude) {
		const shrink = Math.cos(quantile(latitude, 0.5) * RAD_PER_DEG);
		const ratio = ratioOfSums(seconds, speed, (i) => {
			const north = latitude[i] - latitude[i - 1];
			const east = (longitude[i] - longitude[i - 1]) * shrink;
			return Math.hypot(north, east) * METRES_PER_DEGREE;
		});
		if (ratio > 0) return { kmhPerUnit: ratio * KMH_PER_MPS, source: 'the way between positions' };
	}
	const [x, y] = [columns.get('positionX'), columns.get('positionY')];
	if (x && y) {
		const ratio = ratioOfSums(seconds, speed, (i) => Math.hypot(x[i] - x[i - 1], y[i] - y[i - 1]));
		if (ratio > 0) return { kmhPerUnit: ratio * KMH_PER_MPS, source: 'the way between positions' };
	}
	const acceleration = columns.get('accLong');
	if (acceleration && accelerationUnit) {
		const ratio = accelerationRatio(seconds, speed, acceleration, accelerationUnit.factor);
		if (ratio > 0) return { kmhPerUnit: ratio * KMH_PER_MPS, source: 'the longitudinal acceleration' };
	}
	return null;
}

/** The unit of speed with this factor, if there is one near. */
export function speedKmhPerUnit(kmhPerUnit: number): Unit | null {
	const units = ['km/h', 'm/s', 'mph', 'kn', 'ft/s'].map(unitById);
	return units.find(({ factor }) => Math.abs(Math.log(kmhPerUnit / factor)) < TOLERANCE) ?? null;
}

/** Σ way / Σ speed · time over steps that go forward by a plausible amount. */
function ratioOfSums(seconds: Float64Array, speed: Column, wayM: (i: number) => number): number {
	let way = 0;
	let sum = 0;
	for (let i = 1; i < seconds.length; i++) {
		const step = seconds[i] - seconds[i - 1];
		if (!(step > 0 && step < MAX_STEP_S)) continue;
		const covered = wayM(i);
		const at = ((speed[i] + speed[i - 1]) / 2) * step;
		// Restarts and jumps are no motion: nothing on wheels covers 150 m in a second.
		if (!(covered >= 0 && covered < 150 * step && at > 0)) continue;
		way += covered;
		sum += at;
	}
	return sum > 0 ? way / sum : NaN;
}

/** Least squares of a · Δt (m/s) on the change of speed (units) over about half a second. */
function accelerationRatio(seconds: Float64Array, speed: Column, acceleration: Column, mps2PerUnit: number): number {
	const rest = quantile(acceleration, 0.5);
	const rate = (seconds.length - 1) / (seconds[seconds.length - 1] - seconds[0]);
	const span = Math.max(1, Math.round(rate / 2));
	let products = 0;
	let squares = 0;
	for (let i = span; i < seconds.length; i += span) {
		const step = seconds[i] - seconds[i - span];
		if (!(step > 0 && step < MAX_STEP_S)) continue;
		let sum = 0;
		for (let k = i - span + 1; k <= i; k++) sum += (acceleration[k] + acceleration[k - 1]) / 2;
		const gained = speed[i] - speed[i - span];
		const expected = (sum / span) * mps2PerUnit * step;
		if (!Number.isFinite(gained) || !Number.isFinite(expected) || !Number.isFinite(rest)) continue;
		products += expected * gained;
		squares += gained * gained;
	}
	return squares > 0 ? Math.abs(products / squares) : NaN;
}
