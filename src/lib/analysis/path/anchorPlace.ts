import type { LapMarks } from '../laps/lapMarks.ts';
import { median } from '../stats/quantile.ts';
import { sampleBefore, wayShare } from '../trace/placeTime.ts';
import type { Channels } from '../model.ts';

/** Marks known better than this know the line better than the projection on the path does. */
const FINE_S = 0.0015;
/** The file's line and the path's are the same when its marks lie this near to it: a line is not quite square to every path. */
const LARGEST_SHIFT_M = 4;
/** What a mark moves fades over this way before and behind the line. */
const FADE_M = 80;

/**
 * Pins places to the file's own crossings of the line, where these are finely known and are crossings of this path's line: each
 * crossing is put at exactly a whole turn. What that moves is due to the line's own direction, which need not be square to the path,
 * and to the receiver; both belong to the place where the line is, so the move fades away from it.
 *
 * @param placeM unwrapped places by sample; changed in place, unless the marks are coarse or belong to another line
 */
export function anchorPlace(placeM: Float64Array, channels: Channels, lengthM: number, marks: LapMarks): void {
	const own = marks.source !== 'chosenLine' && marks.source !== 'lapLength' && marks.source !== 'none';
	if (!own || !(marks.plusMinusS <= FINE_S)) return;
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
	if (at.length === 0 || Math.abs(median(off)) > LARGEST_SHIFT_M) return;
	const fade = Math.min(FADE_M, lengthM / 4);
	let k = 0;
	for (let i = 0; i < placeM.length; i++) {
		const place = placeM[i];
		while (k + 1 < at.length && place - at[k] > at[k + 1] - place) k++;
		const away = Math.abs(place - at[k]);
		// one wild mark is left to the projection
		if (!(away < fade) || Math.abs(off[k]) > LARGEST_SHIFT_M) continue;
		const share = away / fade;
		placeM[i] = place - off[k] * (1 - share * share * (3 - 2 * share));
	}
}
