import type { Channels } from '../model.ts';
import { timeShare } from '../trace/placeTime.ts';
import type { CrossingTimes } from './crossingsByRestart.ts';

/** A lap's middle may miss the even spacing by this share of a sample step before laps count as differently long. */
const LARGEST_MISFIT = 0.6;

/**
 * Crossing times within the marked sample steps when every lap has the same length along the distance channel (a distance along
 * the centre line, or a driver who repeats his line to the metre): the crossings are then evenly spaced.
 *
 * Every step bounds where the first crossing and the lap length can be; the middle of what all steps together leave is taken. Where
 * they leave nothing but miss it narrowly, the least squares line through the middles of the steps is.
 *
 * @param marks first samples behind the crossings
 * @returns null where lap lengths differ by more than sampling explains, or with fewer than three crossings
 */
export function crossingsByEvenLaps(channels: Channels, marks: number[]): CrossingTimes | null {
	const { distanceM, timeS, speedKmh } = channels;
	if (marks.length < 3 || marks[0] === 0) return null;
	const from = marks.map((i) => distanceM[i - 1]);
	const to = marks.map((i) => distanceM[i]);
	const even = withinSteps(from, to) ?? throughMiddles(from, to);
	if (!even) return null;
	const atS = Float64Array.from(marks, (i, k) => {
		const way = even.firstM + k * even.lengthM - from[k];
		const share = Math.min(Math.max(way / (to[k] - from[k]), 0), 1);
		return timeS[i - 1] + (timeS[i] - timeS[i - 1]) * timeShare(share, speedKmh[i - 1], speedKmh[i]);
	});
	const last = marks[marks.length - 1];
	const speed = (to[to.length - 1] - from[from.length - 1]) / (timeS[last] - timeS[last - 1]);
	return { atS, plusMinusS: even.plusMinusM / speed };
}

interface EvenLaps {
	firstM: number;
	lengthM: number;
	plusMinusM: number;
}

/** Middle of all even spacings whose every crossing lies within its step; null where there is none. */
function withinSteps(from: number[], to: number[]): EvenLaps | null {
	const n = from.length;
	let shortest = -Infinity;
	let longest = Infinity;
	for (let j = 0; j < n; j++) {
		for (let k = j + 1; k < n; k++) {
			longest = Math.min(longest, (to[k] - from[j]) / (k - j));
			shortest = Math.max(shortest, (from[k] - to[j]) / (k - j));
		}
	}
	const lengthM = (shortest + longest) / 2;
	const earliest = Math.max(...from.map((way, k) => way - k * lengthM));
	const latest = Math.min(...to.map((way, k) => way - k * lengthM));
	if (!(shortest <= longest && earliest <= latest)) return null;
	const plusMinusM = (latest - earliest) / 2 + ((longest - shortest) * (n - 1)) / 4;
	return { firstM: (earliest + latest) / 2, lengthM, plusMinusM };
}

function throughMiddles(from: number[], to: number[]): EvenLaps | null {
	const n = from.length;
	const middle = from.map((way, k) => (way + to[k]) / 2);
	const centre = (n - 1) / 2;
	const mean = middle.reduce((sum, way) => sum + way, 0) / n;
	let sxy = 0;
	let sxx = 0;
	for (let k = 0; k < n; k++) {
		sxy += (k - centre) * middle[k];
		sxx += (k - centre) ** 2;
	}
	const lengthM = sxy / sxx;
	const firstM = mean - lengthM * centre;
	const misfits = middle.map((way, k) => Math.abs(firstM + k * lengthM - way) / (to[k] - from[k]));
	if (!misfits.every((misfit) => misfit <= LARGEST_MISFIT)) return null;
	return { firstM, lengthM, plusMinusM: (to[0] - from[0]) / 2 };
}
