/** A peak of curvature with what belongs to it. */
export interface Peak {
	/** index of its highest entry */
	at: number;
	/** height, 1/m, > 0 */
	height: number;
	/** middle of the stretch over 90 % of the height: on an arc of constant radius any entry may be the highest */
	centre: number;
}

/** A stretch of one hand around one or more peaks of curvature that do not fall under 30 % between them. */
export interface Lobe {
	/** +1 left, −1 right */
	hand: 1 | -1;
	peaks: Peak[];
	/** extent, indices: to the change of hand or to the valley towards the next lobe */
	from: number;
	to: number;
	/** lowest entry between each peak and the next; one fewer than peaks */
	valleys: number[];
}

/** Two peaks with a valley over this share of the lower one are one peak. */
export const ONE_PEAK_SHARE = 0.7;
/** Two peaks with a valley under this share of the lower one have a way out and a way in of their own. */
export const OWN_FLANK_SHARE = 0.3;
/** Way over which a peak's top counts as flat, as a share of its height. */
const TOP_SHARE = 0.9;
/** Heights below this are a straight: 5 km radius. */
const LEAST_HEIGHT_PER_M = 1 / 5000;

/**
 * Splits curvature into lobes: first by hand, then at valleys under 30 % of the lower peak beside them. Peaks with a valley over 70 %
 * are one. O(n + peaks²) within a hand's stretch.
 *
 * @param curvature smoothed, left positive, 1/m
 */
export function curvatureLobes(curvature: Float64Array): Lobe[] {
	const lobes: Lobe[] = [];
	const n = curvature.length;
	let from = 0;
	while (from < n) {
		const hand = curvature[from] >= 0 ? 1 : -1;
		let to = from;
		while (to + 1 < n && curvature[to + 1] >= 0 === curvature[from] >= 0) to++;
		lobes.push(...lobesOfStretch(curvature, hand, from, to));
		from = to + 1;
	}
	return lobes;
}

interface Summit {
	/** entries of the local maxima that were joined */
	first: number;
	last: number;
	at: number;
	height: number;
}

function lobesOfStretch(curvature: Float64Array, hand: 1 | -1, from: number, to: number): Lobe[] {
	const height = (i: number) => hand * curvature[i];
	const summits: Summit[] = [];
	/** lowest entry between summit k and k + 1 */
	const valleys: number[] = [];
	let lowest = from;
	for (let i = from; i <= to; i++) {
		if (height(i) < height(lowest)) lowest = i;
		const rising = i === from || height(i) > height(i - 1);
		const falling = i === to || height(i) >= height(i + 1);
		if (!(rising && falling && height(i) > LEAST_HEIGHT_PER_M)) continue;
		if (summits.length > 0) valleys.push(lowest);
		summits.push({ first: i, last: i, at: i, height: height(i) });
		lowest = i;
	}
	if (summits.length === 0) return [];
	const share = (k: number) => height(valleys[k]) / Math.min(summits[k].height, summits[k + 1].height);
	// join the pair with the shallowest valley until every valley is deep enough
	for (;;) {
		let best = -1;
		for (let k = 0; k < valleys.length; k++) if (best < 0 || share(k) > share(best)) best = k;
		if (best < 0 || share(best) < ONE_PEAK_SHARE) break;
		const [a, b] = [summits[best], summits[best + 1]];
		const higher = a.height >= b.height ? a : b;
		summits.splice(best, 2, { first: a.first, last: b.last, at: higher.at, height: higher.height });
		valleys.splice(best, 1);
	}
	const lobes: Lobe[] = [];
	let start = from;
	let peaks: Peak[] = [];
	let inner: number[] = [];
	summits.forEach((summit, k) => {
		peaks.push({ at: summit.at, height: summit.height, centre: centreOf(height, summit, from, to) });
		const isLast = k === summits.length - 1;
		if (!isLast && share(k) >= OWN_FLANK_SHARE) {
			inner.push(valleys[k]);
			return;
		}
		lobes.push({ hand, peaks, from: start, to: isLast ? to : valleys[k], valleys: inner });
		if (!isLast) start = valleys[k];
		peaks = [];
		inner = [];
	});
	return lobes;
}

/** Middle of the stretch over 90 % of a summit's height, between entries where the height is crossed. */
function centreOf(
	height: (i: number) => number,
	{ first, last, height: top }: Summit,
	from: number,
	to: number
): number {
	const level = TOP_SHARE * top;
	let low = first;
	while (low < last && height(low) < level) low++;
	while (low > from && height(low - 1) >= level) low--;
	let high = last;
	while (high > first && height(high) < level) high--;
	while (high < to && height(high + 1) >= level) high++;
	const lowPart = low > from ? (height(low) - level) / (height(low) - height(low - 1)) : 0;
	const highPart = high < to ? (height(high) - level) / (height(high) - height(high + 1)) : 0;
	return (low - Math.min(lowPart, 1) + high + Math.min(highPart, 1)) / 2;
}
