import { crossingsByLapDistance } from '../laps/crossingsByRestart.ts';
import type { LapMarks } from '../laps/lapMarks.ts';
import { wayBetween } from '../laps/wayBetween.ts';
import type { Channels, ReferencePath } from '../model.ts';
import { quantile } from '../stats/quantile.ts';
import { sampleBefore } from '../trace/placeTime.ts';

/** Laps counted along the track itself all have one length, whatever line is driven; a car's own way differs by metres. */
const SAME_LENGTH_M = 0.1;
/** Rounding and noise up to here; coarser distances are no better than the projection. */
const LARGEST_NOISE_S = 0.0012;
/** Along the track, distance and projection agree but for lines that run at an angle to each other. */
const USUAL_DIFFERENCE_M = 0.3;
const LARGEST_DIFFERENCE_M = 5;
/** Every how many samples that is checked. */
const CHECK_STRIDE = 32;

/**
 * Length of the track by the file's own lap distance.
 *
 * @returns null where the file has none, or its laps differ in length, so that it counts the car's own way
 */
export function trackLength(channels: Channels, { crossingS }: LapMarks): number | null {
	const { lapDistanceM, timeS } = channels;
	if (!lapDistanceM) return null;
	const behind: number[] = [];
	const lengths: number[] = [];
	for (const crossing of crossingS) {
		const i = sampleBefore(timeS, crossing) + 1;
		// a crossing beyond the ends of the run has no restart
		if (i < 1 || i >= timeS.length || !(lapDistanceM[i - 1] > lapDistanceM[i])) continue;
		behind.push(i);
		lengths.push(lapDistanceM[i - 1] + wayBetween(channels, i - 1, i) - lapDistanceM[i]);
	}
	const times = crossingsByLapDistance(channels, behind);
	if (!times || !(times.plusMinusS <= LARGEST_NOISE_S)) return null;
	const shortest = Math.min(...lengths);
	const longest = Math.max(...lengths);
	return longest - shortest <= SAME_LENGTH_M ? (shortest + longest) / 2 : null;
}

/**
 * The file's track distance at each whole metre of a path.
 *
 * @param sample, placeM samples of the lap that the path stands on, and their places, rising over one turn
 * @returns null where it cannot be read throughout
 */
export function trackDistanceByPlace(
	{ lapDistanceM }: Channels,
	sample: Int32Array,
	placeM: Float64Array,
	lengthM: number,
	trackM: number
): Float64Array | null {
	if (!lapDistanceM) return null;
	const out = new Float64Array(Math.floor(lengthM) + 1);
	// from (0, 0) over the lap's samples to (lengthM, trackM)
	let [place, distance] = [0, 0];
	let s = 0;
	// a lap that begins right on the line may be counted from its end
	const turnM = Math.floor(placeM[placeM.length >> 1] / lengthM) * lengthM;
	const reach = (nextPlace: number, nextDistance: number) => {
		for (; s < out.length && s <= nextPlace; s++) {
			out[s] = distance + ((s - place) / (nextPlace - place)) * (nextDistance - distance) || 0;
		}
		[place, distance] = [nextPlace, nextDistance];
	};
	for (let j = 0; j < sample.length; j++) {
		const next = lapDistanceM[sample[j]];
		const at = placeM[j] - turnM;
		if (at > place && at < lengthM && next > distance && next < trackM) reach(at, next);
	}
	reach(lengthM + 1e-9, trackM);
	return out;
}

/**
 * Puts a run's places by its own track distance, where that counts the same way as the path's.
 *
 * @param placeM places by projection or by stretched distance, which say the turn and what is credible; changed in place, or left
 *               as they are where the distances do not count alike
 */
export function placeByTrackDistance(
	placeM: Float64Array,
	channels: Channels,
	path: ReferencePath,
	marks: LapMarks
): void {
	const { lapDistanceM } = channels;
	const ownM = trackLength(channels, marks);
	const place = ownM === null ? null : placeReader(path, ownM);
	if (!lapDistanceM || !place) return;
	const differences = new Float64Array(Math.floor(placeM.length / CHECK_STRIDE) + 1).fill(NaN);
	for (let i = 0; i < placeM.length; i += CHECK_STRIDE) {
		differences[i / CHECK_STRIDE] = Math.abs(place(lapDistanceM[i], placeM[i]) - placeM[i]);
	}
	if (!(quantile(differences, 0.5) <= USUAL_DIFFERENCE_M)) return;
	if (!(quantile(differences, 0.98) <= LARGEST_DIFFERENCE_M)) return;
	let furthest = -Infinity;
	for (let i = 0; i < placeM.length; i++) {
		const read = place(lapDistanceM[i], placeM[i]);
		if (Math.abs(read - placeM[i]) <= LARGEST_DIFFERENCE_M) placeM[i] = read;
		if (placeM[i] < furthest) placeM[i] = furthest;
		else if (!Number.isNaN(placeM[i])) furthest = placeM[i];
	}
}

/**
 * Reads the unwrapped place at a track distance, given roughly where it is.
 *
 * @returns null where the path knows no track distance, or one of another length
 */
function placeReader(
	{ lengthM, trackDistanceM }: ReferencePath,
	ownM: number
): ((distanceM: number, nearM: number) => number) | null {
	if (!trackDistanceM || trackDistanceM.length < 2) return null;
	const known = trackDistanceM;
	const last = known.length - 1;
	// the path's track length, drawn on over the last part of a metre
	const pathM = known[last] + (lengthM - last) * (known[last] - known[last - 1]);
	if (Math.abs(ownM - pathM) > 2 * SAME_LENGTH_M) return null;
	let at = 0;
	return (distanceM, nearM) => {
		if (!(distanceM >= 0 && distanceM <= ownM + SAME_LENGTH_M)) return NaN;
		while (at > 0 && known[at] > distanceM) at = at > 8 && known[at - 8] > distanceM ? 0 : at - 1;
		while (at < last && known[at + 1] <= distanceM) at++;
		const next = at < last ? known[at + 1] : ownM;
		const span = at < last ? 1 : lengthM - at;
		const s = at + (next > known[at] ? Math.min((distanceM - known[at]) / (next - known[at]), 1) * span : 0);
		return s + Math.round((nearM - s) / lengthM) * lengthM;
	};
}
