import type { PathOrigin } from '../../schemas/analysisDocument.ts';
import type { Channels } from '../model.ts';
import { smoothScattered } from '../stats/smoothScattered.ts';
import { sampleBefore } from '../trace/placeTime.ts';
import { bendReader } from './ownCurvature.ts';

/** A lap for which every sample's place along it is known. */
export interface MeasuredLap {
	startS: number;
	endS: number;
	/** place along the lap of every sample between start and end, m; same index as `from` … `to` */
	placeM: Float64Array;
	from: number;
	to: number;
}

/** A plan drawn from turning alone, at whole metres. */
export interface DrawnPlan {
	origin: PathOrigin;
	xM: Float64Array;
	yM: Float64Array;
	curvaturePerM: Float64Array;
}

/** Below this speed accelerations and yaw rates do not say how tight the line is. */
const LEAST_KMH = 30;
/** Detail that is kept, m: chattering sensors need more smoothing than positions. */
const DETAIL_M = 18;
/** A full turn that is off by less than this is put right by an offset of the sensor, by more also by its scale. */
const OFFSET_SHARE = 0.05;
/** Steering that turns both ways equally much has no full turn to scale it by; then a usual car's geometry is taken. */
const USUAL_STEERING_PER_M_DEG = Math.PI / 180 / (2.6 * 13);

/**
 * Draws a plan from lateral acceleration, yaw rate or steering and speed. Heading is the integral of curvature along the way; a
 * closed lap must turn by whole turns, which gives the sensor's offset, or its scale, and must end where it began: what is left of
 * the gap is spread evenly.
 *
 * @param laps    laps to average, each with places along the path
 * @param lengthM the path's length
 * @param closed  whether the path ends where it begins
 * @returns null where the run has none of these channels
 */
export function pathFromMotion(
	channels: Channels,
	laps: MeasuredLap[],
	lengthM: number,
	closed: boolean
): DrawnPlan | null {
	const candidates: { origin: PathOrigin; bends: Float64Array; misfit: number }[] = [];
	for (const origin of ['latAcc', 'yawRate'] as const) {
		const reader = bendReader(channels, origin, 1);
		if (!reader) continue;
		const bends = averaged(channels, laps, lengthM, closed, reader, LEAST_KMH);
		const turns = turned(bends, lengthM, closed) / (2 * Math.PI);
		const misfit = closed ? Math.abs(turns - Math.round(turns)) : 0;
		candidates.push({ origin, bends, misfit });
	}
	const best = candidates.sort((a, b) => a.misfit - b.misfit)[0];
	if (best) return drawn(best.origin, closed ? offsetRight(best.bends, lengthM) : best.bends, lengthM, closed);
	const reader = bendReader(channels, 'steering', 1);
	if (!reader) return null;
	const bends = averaged(channels, laps, lengthM, closed, reader, 0);
	const net = turned(bends, lengthM, closed);
	const gross = turned(bends.map(Math.abs), lengthM, closed);
	const scale = closed && Math.abs(net) > 0.1 * gross ? (2 * Math.PI) / Math.abs(net) : USUAL_STEERING_PER_M_DEG;
	return drawn(
		'steering',
		bends.map((bend) => bend * scale),
		lengthM,
		closed
	);
}

/** Curvature at whole metres, averaged over laps and smoothed. */
function averaged(
	channels: Channels,
	laps: MeasuredLap[],
	lengthM: number,
	closed: boolean,
	bendAt: (i: number) => number,
	leastKmh: number
): Float64Array {
	const spans = Math.max(8, Math.round(lengthM));
	const nodes = closed ? spans : spans + 1;
	const at: number[] = [];
	const bend: number[] = [];
	for (const lap of laps) {
		for (let i = lap.from; i <= lap.to; i++) {
			const value = bendAt(i);
			const place = lap.placeM[i - lap.from];
			if (!(channels.speedKmh[i] >= leastKmh) || !Number.isFinite(value) || !Number.isFinite(place)) continue;
			at.push((Math.min(Math.max(place, 0), lengthM) * spans) / lengthM);
			bend.push(value);
		}
	}
	const cut = (2 * Math.PI) / DETAIL_M;
	const lambda = Math.max(at.length / nodes, 0.1) / Math.pow(cut, 6);
	const [smooth] = smoothScattered(Float64Array.from(at), [Float64Array.from(bend)], null, { nodes, lambda, closed });
	return smooth;
}

/** Takes off what keeps a closed lap from turning by whole turns. */
function offsetRight(bends: Float64Array, lengthM: number): Float64Array {
	const net = turned(bends, lengthM, true);
	const whole = Math.round(net / (2 * Math.PI)) * 2 * Math.PI;
	if (whole !== 0 && Math.abs(net - whole) > OFFSET_SHARE * Math.abs(whole)) {
		return bends.map((bend) => (bend * whole) / net);
	}
	const offset = (net - whole) / lengthM;
	return bends.map((bend) => bend - offset);
}

function drawn(origin: PathOrigin, bends: Float64Array, lengthM: number, closed: boolean): DrawnPlan {
	const spans = closed ? bends.length : bends.length - 1;
	const step = lengthM / spans;
	const x = new Float64Array(spans + 1);
	const y = new Float64Array(spans + 1);
	let heading = 0;
	for (let i = 0; i < spans; i++) {
		const next = bends[(i + 1) % bends.length];
		const turn = ((bends[i] + next) / 2) * step;
		x[i + 1] = x[i] + step * Math.cos(heading + turn / 2);
		y[i + 1] = y[i] + step * Math.sin(heading + turn / 2);
		heading += turn;
	}
	const [gapX, gapY] = closed ? [x[spans], y[spans]] : [0, 0];
	const count = Math.floor(lengthM) + 1;
	const at = (values: Float64Array, gap: number, place: number) => {
		const u = Math.min(place / step, spans);
		const i = Math.min(Math.floor(u), spans - 1);
		return values[i] + (u - i) * (values[i + 1] - values[i]) - (gap * u) / spans;
	};
	return {
		origin,
		xM: Float64Array.from({ length: count }, (_, k) => at(x, gapX, k)),
		yM: Float64Array.from({ length: count }, (_, k) => at(y, gapY, k)),
		curvaturePerM: Float64Array.from({ length: count }, (_, k) => {
			const u = k / step;
			const i = Math.floor(u);
			return bends[i % bends.length] + (u - i) * (bends[(i + 1) % bends.length] - bends[i % bends.length]);
		})
	};
}

/** Angle turned along the whole plan, rad. */
function turned(bends: Float64Array, lengthM: number, closed: boolean): number {
	let total = 0;
	for (const bend of bends) total += bend;
	return (total * lengthM) / (closed ? bends.length : bends.length - 1);
}

/** Samples of a lap with places along it in proportion to the distance driven. */
export function measureLap(
	{ timeS, distanceM }: Channels,
	startS: number,
	endS: number,
	startM: number,
	endM: number,
	lengthM: number
): MeasuredLap {
	const from = Math.max(sampleBefore(timeS, startS), 0);
	const to = Math.min(sampleBefore(timeS, endS) + 1, timeS.length - 1);
	const placeM = new Float64Array(to - from + 1);
	for (let i = from; i <= to; i++) placeM[i - from] = ((distanceM[i] - startM) / (endM - startM)) * lengthM;
	return { startS, endS, placeM, from, to };
}
