import type { LapMarks } from '../laps/lapMarks.ts';
import type { Channels, ReferencePath } from '../model.ts';
import { median } from '../stats/quantile.ts';
import { robustSpread } from '../stats/robustSpread.ts';
import { sampleBefore, wayShare } from '../trace/placeTime.ts';
import { MATCH_STEP_M, matchSpeeds } from './matchSpeeds.ts';
import type { Knot } from './matchSpeeds.ts';

/** Laps whose lengths agree to this share are counted along the track itself, not along the car's own way: nothing to match. */
const SAME_LENGTH_SHARE = 0.001;
/** A lap this much longer or shorter than the others is no pass of the whole path. */
const LAP_SHARE = 0.12;

/**
 * Place of a run without positions: between two crossings of the line by distance, scaled so that every lap has the path's length,
 * and, where the laps' lengths show that the distance is the car's own way, stretched between matched speed minima.
 *
 * @returns unwrapped, non-decreasing places by sample, turn 0 at the first crossing; NaN where there is no crossing at all
 */
export function stretchPlace(channels: Channels, marks: LapMarks, path: ReferencePath): Float64Array {
	const { timeS } = channels;
	const placeM = new Float64Array(timeS.length).fill(NaN);
	const crossings = marks.crossingS;
	const { lengthM } = path;
	if (crossings.length === 0)
		return path.closed ? placeM : placeM.map((_, i) => channels.distanceM[i] - channels.distanceM[0]);
	const wayM = Float64Array.from(crossings, (t) => distanceAt(channels, t));
	const lengths = wayM.subarray(1).map((way, k) => way - wayM[k]);
	const usual = lengths.length > 0 ? median(lengths) : lengthM;
	const same =
		robustSpread(lengths) <= SAME_LENGTH_SHARE * usual && Math.abs(usual - lengthM) <= SAME_LENGTH_SHARE * lengthM;
	const pathKmh = onGrid(lengthM, (place) => path.speedKmh[Math.min(Math.round(place), path.speedKmh.length - 1)]);
	let lap = -1;
	let knots: Knot[] = [];
	for (let i = 0; i < timeS.length; i++) {
		while (lap + 1 < crossings.length && timeS[i] >= crossings[lap + 1]) {
			lap++;
			const whole = lap < lengths.length && Math.abs(lengths[lap] - usual) <= LAP_SHARE * usual;
			knots = whole && !same ? matchSpeeds(lapSpeed(channels, wayM[lap], lengths[lap], lengthM), pathKmh, lengthM) : [];
		}
		if (lap < 0) placeM[i] = ((channels.distanceM[i] - wayM[0]) * lengthM) / usual;
		else {
			const driven = channels.distanceM[i] - wayM[lap];
			const scaled = lap < lengths.length ? (driven * lengthM) / lengths[lap] : (driven * lengthM) / usual;
			placeM[i] = lap * lengthM + (knots.length > 0 ? stretched(knots, scaled) : scaled);
		}
		if (i > 0 && placeM[i] < placeM[i - 1]) placeM[i] = placeM[i - 1];
	}
	return placeM;
}

/** Distance at a time; the speed changes evenly between samples. Goes on beyond the run's ends. */
export function distanceAt({ timeS, distanceM, speedKmh }: Channels, atS: number): number {
	const i = Math.min(Math.max(sampleBefore(timeS, atS), 0), timeS.length - 2);
	const share = (atS - timeS[i]) / (timeS[i + 1] - timeS[i]);
	return distanceM[i] + (distanceM[i + 1] - distanceM[i]) * wayShare(share, speedKmh[i], speedKmh[i + 1]);
}

/** Speed of a lap every 5 m of its length scaled to the path's. */
function lapSpeed({ distanceM, speedKmh }: Channels, fromM: number, ownM: number, lengthM: number): Float64Array {
	let i = 0;
	return onGrid(lengthM, (place) => {
		const way = fromM + (place * ownM) / lengthM;
		while (i + 2 < distanceM.length && distanceM[i + 1] < way) i++;
		const share = (way - distanceM[i]) / (distanceM[i + 1] - distanceM[i]) || 0;
		return speedKmh[i] + share * (speedKmh[i + 1] - speedKmh[i]);
	});
}

function onGrid(lengthM: number, value: (placeM: number) => number): Float64Array {
	return Float64Array.from({ length: Math.floor(lengthM / MATCH_STEP_M) + 1 }, (_, k) => value(k * MATCH_STEP_M));
}

function stretched(knots: Knot[], place: number): number {
	let k = 0;
	while (k + 2 < knots.length && knots[k + 1].fromM <= place) k++;
	const { fromM, toM } = knots[k];
	const next = knots[k + 1];
	return toM + ((place - fromM) * (next.toM - toM)) / (next.fromM - fromM);
}
