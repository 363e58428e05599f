import type { LapMarks } from '../laps/lapMarks.ts';
import { median } from '../stats/quantile.ts';
import { robustSpread } from '../stats/robustSpread.ts';
import { sampleBefore, wayShare } from '../trace/placeTime.ts';
import type { Channels } from '../model.ts';

/** Marks known better than this know the line better than the projection on the path does. */
const FINE_S = 0.0015;
/** The file's line and the path's are the same when all marks lie this near to it, and this near to each other. */
const LARGEST_SHIFT_M = 3;
const LARGEST_SPREAD_M = 1.5;

/**
 * Pins places to the file's own crossings of the line, where these are finely known and are crossings of this path's line: each
 * crossing is put at exactly a whole turn, and what that moves fades in place from crossing to crossing.
 *
 * @param placeM unwrapped places by sample
 * @returns new places; the input itself where the marks are coarse or belong to another line
 */
export function anchorPlace(placeM: Float64Array, channels: Channels, lengthM: number, marks: LapMarks): Float64Array {
	const own = marks.source !== 'chosenLine' && marks.source !== 'lapLength' && marks.source !== 'none';
	if (!own || !(marks.plusMinusS <= FINE_S) || marks.crossingS.length === 0) return placeM;
	const { timeS, speedKmh } = channels;
	const at: number[] = [];
	const off: number[] = [];
	for (const crossing of marks.crossingS) {
		const i = sampleBefore(timeS, crossing);
		if (i < 0 || i + 1 >= timeS.length) continue;
		const share = wayShare((crossing - timeS[i]) / (timeS[i + 1] - timeS[i]), speedKmh[i], speedKmh[i + 1]);
		const place = placeM[i] + share * (placeM[i + 1] - placeM[i]);
		if (!Number.isFinite(place)) continue;
		at.push(place);
		off.push(place - Math.round(place / lengthM) * lengthM);
	}
	if (at.length === 0) return placeM;
	const middle = median(off);
	const spread = at.length > 2 ? robustSpread(off) : Math.max(...off) - Math.min(...off);
	if (!(Math.abs(middle) <= LARGEST_SHIFT_M && spread <= LARGEST_SPREAD_M)) return placeM;
	// one wild mark is left to the projection
	const kept = at.map((_, k) => k).filter((k) => Math.abs(off[k] - middle) <= LARGEST_SHIFT_M);
	const anchored = new Float64Array(placeM.length);
	let k = 0;
	for (let i = 0; i < placeM.length; i++) {
		const place = placeM[i];
		while (k + 1 < kept.length && place >= at[kept[k + 1]]) k++;
		const from = kept[k];
		const to = kept[Math.min(k + 1, kept.length - 1)];
		const share = to === from ? 0 : Math.min(Math.max((place - at[from]) / (at[to] - at[from]), 0), 1);
		anchored[i] = place - (off[from] + share * (off[to] - off[from]));
	}
	return anchored;
}
