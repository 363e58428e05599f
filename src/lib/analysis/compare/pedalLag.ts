import type { CornerMetrics } from '../../schemas/analysisDocument.ts';
import type { Channels, LapGrid } from '../model.ts';
import { KMH_PER_MPS } from '../../units.ts';

/** A lag under this is not told from how a car answers its brake: two cars differ by some hundredths. */
export const LEAST_PEDAL_LAG_S = 0.06;
const LARGEST_LAG_S = 0.5;
const STEP_S = 0.02;
/** Half of the window over which motion is read, in steps. */
const HALF_STEPS = 3;
/** Brake and deceleration that follow each other less than this say nothing of their clocks. */
const LEAST_CORRELATION = 0.7;

/**
 * By how much later the driver's pedals are recorded against the car's own motion than the reference's: the lag between the clocks of two
 * devices, which would otherwise read as another braking point.
 *
 * In each lap the brake is laid on the deceleration along the path, by the shift that correlates best, with a parabola through the best
 * three; the difference of both shifts is what the recordings differ by. O(lap time · 50 Hz · 51).
 *
 * @returns s; 0 where a lap has no brake channel or brake and motion do not follow each other
 */
export function pedalLag(driver: LapGrid, reference: LapGrid): number {
	const own = ownLag(driver);
	const other = ownLag(reference);
	return own === null || other === null ? 0 : own - other;
}

function ownLag(grid: LapGrid): number | null {
	if (!grid.brakePct) return null;
	const { brake, slowing } = series(grid, grid.brakePct);
	const reach = Math.round(LARGEST_LAG_S / STEP_S);
	if (brake.length < 10 * reach) return null;
	const fits = Array.from({ length: 2 * reach + 1 }, (_, k) => correlation(brake, slowing, k - reach, reach));
	const best = fits.reduce((most, fit, k) => (fit > fits[most] ? k : most), 0);
	if (!(fits[best] > LEAST_CORRELATION) || best === 0 || best === fits.length - 1) return null;
	const [before, at, after] = [fits[best - 1], fits[best], fits[best + 1]];
	return (best - reach + (before - after) / (2 * (before - 2 * at + after))) * STEP_S;
}

/** Brake and deceleration along the path at equal steps of time. */
function series({ timeS, lengthM, marginM, lapTimeS }: LapGrid, brakePct: Float64Array) {
	const n = Math.max(0, Math.floor(lapTimeS / STEP_S));
	const place = new Float64Array(n).fill(NaN);
	const brake = new Float64Array(n).fill(NaN);
	let i = marginM;
	for (let k = 0; k < n; k++) {
		const atS = k * STEP_S;
		while (i + 1 < marginM + lengthM && timeS[i + 1] < atS) i++;
		const share = (atS - timeS[i]) / (timeS[i + 1] - timeS[i]);
		if (!(share >= 0 && share <= 1)) continue;
		place[k] = i + share;
		brake[k] = brakePct[i] + share * (brakePct[i + 1] - brakePct[i]);
	}
	const slowing = place.map((at, k) => 2 * at - place[k - HALF_STEPS] - place[k + HALF_STEPS]);
	return { brake, slowing };
}

/** Correlation of late[i + shift] with own[i] where both are known. */
function correlation(late: Float64Array, own: Float64Array, shift: number, reach: number): number {
	let [n, x, y, xx, yy, xy] = [0, 0, 0, 0, 0, 0];
	for (let i = reach; i < own.length - reach; i++) {
		const [a, b] = [late[i + shift], own[i]];
		if (!Number.isFinite(a + b)) continue;
		n++;
		x += a;
		y += b;
		xx += a * a;
		yy += b * b;
		xy += a * b;
	}
	return (n * xy - x * y) / Math.sqrt((n * xx - x * x) * (n * yy - y * y));
}

/** Channels with what hands and feet do moved back by a lag; nothing else changes. */
export function shiftPedals(channels: Channels, lagS: number): Channels {
	const { timeS } = channels;
	const shifted = (values: Float64Array | null): Float64Array | null => {
		if (!values) return null;
		const out = new Float64Array(values.length);
		let k = 0;
		for (let i = 0; i < out.length; i++) {
			const atS = timeS[i] + lagS;
			while (k + 1 < timeS.length - 1 && timeS[k + 1] <= atS) k++;
			while (k > 0 && timeS[k] > atS) k--;
			const share = Math.min(Math.max((atS - timeS[k]) / (timeS[k + 1] - timeS[k]), 0), 1);
			out[i] = share === 0 ? values[k] : values[k] + share * (values[k + 1] - values[k]);
		}
		return out;
	};
	return {
		...channels,
		brakePct: shifted(channels.brakePct),
		throttlePct: shifted(channels.throttlePct),
		steeringDeg: shifted(channels.steeringDeg)
	};
}

const PEDAL_PLACES = [
	'onsetM',
	'peakM',
	'releaseStartM',
	'releaseEndM',
	'turnInM',
	'liftM',
	'smallestOpeningM',
	'pickUpM',
	'fullThrottleM'
] as const;

/** Metrics whose places of hands and feet carry a lag that was not taken out as their ±. */
export function widenByLag(metrics: readonly CornerMetrics[], lagS: number): CornerMetrics[] {
	return metrics.map((m) => {
		const plusMinus = { ...m.plusMinus };
		// arrival speed for what happens before the corner: the larger of what is known
		const kmh = Math.max(m.entryKmh ?? 0, m.minKmh ?? 0, m.exitKmh ?? 0) * ARRIVAL_ROOM;
		for (const field of PEDAL_PLACES)
			if (m[field] !== null) plusMinus[field] = Math.hypot(plusMinus[field] ?? 0, (kmh / KMH_PER_MPS) * Math.abs(lagS));
		return { ...m, plusMinus };
	});
}

/** The car is quicker where it brakes than where the corner begins. */
const ARRIVAL_ROOM = 1.5;
