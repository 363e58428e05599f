import type { Lap } from '../model.ts';
import type { PlacedRun } from '../model.ts';
import { median } from '../stats/quantile.ts';
import { placedEnds, sampleBefore, timeAtPlace } from '../trace/placeTime.ts';
import type { LapMarks } from './lapMarks.ts';

/** A stretch before the first or after the last crossing that is shorter than this is not worth a row. */
const LEAST_STRETCH_S = 0.2;
/** A car that stood before its first crossing, or stands after its last, was leaving or entering the pits. */
const STANDING_KMH = 10;
/** A crossing this far beside the others, and this much slower, is in the pit lane. */
const PIT_OFFSET_M = 8;
const PIT_SPEED_SHARE = 0.7;

/**
 * Laps of a run that lies on its path: from one passage of s = 0 to the next, with what is driven before the first and after the
 * last of them. A passage through the pit lane ends an in lap and opens an out lap. Nothing is judged here.
 *
 * @param placed the run; its own list of laps is not read
 * @param marks  for the file's own lap numbers and the ± of its crossings
 * @returns in order of time; numbers are the file's own where all of them are known and different, else counted, 0 before the first crossing
 */
export function listLaps(placed: Omit<PlacedRun, 'laps'>, marks: LapMarks): Lap[] {
	const { channels, path } = placed;
	const { timeS } = channels;
	const lastS = timeS[timeS.length - 1];
	const crossings = passages(placed);
	if (!path.closed || crossings.length === 0) {
		return numbered([stretch('partial', timeS[0], lastS, path.closed ? null : 0)], channels.lapColumn, timeS, 1);
	}
	const inPits = pitPassages(placed, crossings);
	const laps: Lap[] = [];
	const firstS = crossings[0].atS;
	if (firstS - timeS[0] >= LEAST_STRETCH_S) {
		const left = inPits[0] || standing(0);
		laps.push(stretch(left ? 'out' : 'partial', timeS[0], firstS, null));
	}
	const before = laps.length;
	for (let k = 0; k + 1 < crossings.length; k++) {
		const kind = inPits[k + 1] ? 'in' : inPits[k] ? 'out' : 'timed';
		laps.push(stretch(kind, crossings[k].atS, crossings[k + 1].atS, crossings[k].turn));
	}
	const finalS = crossings[crossings.length - 1].atS;
	if (lastS - finalS >= LEAST_STRETCH_S) {
		laps.push(stretch(standing(timeS.length - 1) ? 'in' : 'partial', finalS, lastS, null));
	}
	return numbered(laps, channels.lapColumn, timeS, before > 0 ? 0 : 1);

	function stretch(kind: Lap['kind'], startS: number, endS: number, turn: number | null): Lap {
		const lengthM = distanceAt(endS) - distanceAt(startS);
		// with positions the crossings are cut on the path; what that leaves is not worth saying
		const plusMinusS = kind === 'partial' || placed.offsetM || marks.plusMinusS <= COARSE_S ? 0 : marks.plusMinusS;
		return { number: 0, kind, startS, endS, lengthM, clean: false, reasons: [], plusMinusS, turn };
	}

	function distanceAt(atS: number): number {
		const { distanceM } = channels;
		const i = Math.min(Math.max(sampleBefore(timeS, atS), 0), timeS.length - 2);
		return distanceM[i] + ((atS - timeS[i]) / (timeS[i + 1] - timeS[i])) * (distanceM[i + 1] - distanceM[i]);
	}

	function standing(i: number): boolean {
		return channels.speedKmh[i] < STANDING_KMH;
	}
}

/** Crossings that are only known to this are coarse. */
export const COARSE_S = 0.002;

interface Passage {
	turn: number;
	atS: number;
}

/** Times at which the run passes whole turns of its path. */
function passages(placed: Omit<PlacedRun, 'laps'>): Passage[] {
	const { placeM, path, channels } = placed;
	const { first, last } = placedEnds(placeM);
	if (first > last) return [];
	const run: PlacedRun = { ...placed, laps: [] };
	const found: Passage[] = [];
	const step = 1.6 * Math.max(placeM[first + 1] - placeM[first] || 0, placeM[last] - placeM[last - 1] || 0);
	const from = Math.ceil((placeM[first] - step) / path.lengthM);
	const to = Math.floor((placeM[last] + step) / path.lengthM);
	for (let turn = from; turn <= to; turn++) {
		const atS = timeAtPlace(run, turn * path.lengthM);
		if (Number.isFinite(atS) && atS > channels.timeS[0] - 1) found.push({ turn: turn + 0, atS });
	}
	return found;
}

/** Which passages go through a pit lane: far beside the usual place on the line, and slowly. */
function pitPassages({ channels, offsetM }: Omit<PlacedRun, 'laps'>, passages: Passage[]): boolean[] {
	const at = passages.map(({ atS }) => Math.max(sampleBefore(channels.timeS, atS), 0));
	if (!offsetM || passages.length < 3) return passages.map(() => false);
	const offset = median(at.map((i) => offsetM[i]));
	const speed = median(at.map((i) => channels.speedKmh[i]));
	return at.map((i) => Math.abs(offsetM[i] - offset) > PIT_OFFSET_M && channels.speedKmh[i] < PIT_SPEED_SHARE * speed);
}

/** Gives laps the file's own numbers where every lap has a different one, else counts from `first`. */
function numbered(laps: Lap[], lapColumn: Float64Array | null, timeS: Float64Array, first: number): Lap[] {
	const own = laps.map(({ startS, endS }) => {
		const i = Math.min(Math.max(sampleBefore(timeS, (startS + endS) / 2), 0), timeS.length - 1);
		return lapColumn ? lapColumn[i] : NaN;
	});
	const usable = own.every(Number.isInteger) && new Set(own).size === own.length;
	return laps.map((lap, k) => ({ ...lap, number: usable ? own[k] : first + k }));
}
