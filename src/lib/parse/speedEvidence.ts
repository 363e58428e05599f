import { RAD_PER_DEG, KMH_PER_MPS } from '../units.ts';
import { unitById } from './columnUnits.ts';
import type { Unit } from './columnUnits.ts';
import type { Column, Columns } from './columns.ts';
import { quantile } from './columns.ts';

export interface SpeedEvidence {
	/** km/h that one unit of the speed column stands for */
	kmhPerUnit: number;
	source: string;
	/** it is the way driven, not a force */
	way: boolean;
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
		if (ratio > 0) return { kmhPerUnit: ratio * KMH_PER_MPS, source: 'distance over time', way: true };
	}
	const [latitude, longitude] = [columns.get('latitude'), columns.get('longitude')];
	const [x, y] = [columns.get('positionX'), columns.get('positionY')];
	const chord =
		latitude && longitude
			? chordOnEarth(latitude, longitude)
			: x && y
				? (from: number, to: number) => Math.hypot(x[to] - x[from], y[to] - y[from])
				: null;
	if (chord) {
		const ratio = chordRatio(seconds, speed, chord);
		if (ratio > 0) return { kmhPerUnit: ratio * KMH_PER_MPS, source: 'the way between positions', way: true };
	}
	const acceleration = columns.get('accLong');
	if (acceleration && accelerationUnit) {
		const ratio = accelerationRatio(seconds, speed, acceleration, accelerationUnit.factor);
		if (ratio > 0) return { kmhPerUnit: ratio * KMH_PER_MPS, source: 'the longitudinal acceleration', way: false };
	}
	return null;
}

/** The unit of speed with this factor, if there is one near. */
export function speedUnitNear(kmhPerUnit: number): Unit | null {
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

function chordOnEarth(latitude: Column, longitude: Column): (from: number, to: number) => number {
	const shrink = Math.cos(quantile(latitude, 0.5) * RAD_PER_DEG);
	return (from, to) => {
		const turn = longitude[to] - longitude[from];
		const east = (turn - 360 * Math.round(turn / 360)) * shrink;
		return Math.hypot(latitude[to] - latitude[from], east) * METRES_PER_DEGREE;
	};
}

/**
 * Median of chord / (speed · time) over spans of about a second while the car is fast: on straights a chord is the way, and over a
 * second the noise of positions is small against it.
 */
function chordRatio(seconds: Float64Array, speed: Column, chord: (from: number, to: number) => number): number {
	const span = Math.max(1, Math.round((seconds.length - 1) / (seconds[seconds.length - 1] - seconds[0])));
	const fast = 0.5 * quantile(speed, 0.95);
	const ratios: number[] = [];
	const stride = Math.max(1, Math.floor(seconds.length / 5000));
	for (let i = span; i < seconds.length; i += stride) {
		const step = seconds[i] - seconds[i - span];
		if (!(step > 0 && step < MAX_STEP_S)) continue;
		let mean = 0;
		for (let k = i - span + 1; k <= i; k++) mean += (speed[k] + speed[k - 1]) / 2 / span;
		const ratio = chord(i - span, i) / (mean * step);
		if (mean > fast && ratio > 0) ratios.push(ratio);
	}
	return quantile(ratios, 0.6);
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
