/** A peak of curvature with what belongs to it. */
export interface Peak {
	/** index of its highest entry */
	at: number;
	/** height, 1/m, > 0 */
	height: number;
	/** middle of the stretch over 90 % of the height: on an arc of constant radius any entry may be the highest */
	centre: number;
	/** mean over that stretch, 1/m: what the radius is taken from, since noise lifts the highest entry */
	topMean: number;
}

/** A stretch of one hand around one or more comparable peaks of curvature that do not fall under 30 % between them. */
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
/** So have two of which one is this much gentler: a long tail behind a tight corner is not its second apex. */
const COMPARABLE_SHARE = 0.4;
/** Way over which a peak's top counts as flat, as a share of its height. */
const TOP_SHARE = 0.9;
/** Heights below this are a straight: 5 km radius. */
const LEAST_HEIGHT_PER_M = 1 / 5000;

/**
 * Splits curvature into lobes: first by hand, then at valleys under 30 % of the lower peak beside them, and where one side is much
 * gentler than the other. Peaks with a valley over 70 % are one. O(n + peaks²) within a hand's stretch.
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
	joinPeaks(summits, valleys, height);
	return grouped(summits, valleys, height).map((group, k, groups) => ({
		hand,
		peaks: group.summits.map((summit) => ({
			at: summit.at,
			height: summit.height,
			...topOf(height, summit, from, to)
		})),
		from: k === 0 ? from : groups[k - 1].valleyBehind,
		to: k === groups.length - 1 ? to : group.valleyBehind,
		valleys: group.valleys
	}));
}

/** Joins summits with a shallow valley between them, the shallowest first; both lists are changed. */
function joinPeaks(summits: Summit[], valleys: number[], height: (i: number) => number): void {
	for (;;) {
		let best = -1;
		let bestShare = ONE_PEAK_SHARE;
		for (let k = 0; k < valleys.length; k++) {
			const share = height(valleys[k]) / Math.min(summits[k].height, summits[k + 1].height);
			if (share >= bestShare) [best, bestShare] = [k, share];
		}
		if (best < 0) return;
		const [a, b] = [summits[best], summits[best + 1]];
		const higher = a.height >= b.height ? a : b;
		summits.splice(best, 2, { first: a.first, last: b.last, at: higher.at, height: higher.height });
		valleys.splice(best, 1);
	}
}

interface Group {
	summits: Summit[];
	valleys: number[];
	/** lowest entry towards the next group; −1 for the last */
	valleyBehind: number;
	height: number;
}

/** Puts summits together that are comparable and have no deep valley between them, the shallowest valley first. */
function grouped(summits: Summit[], valleys: number[], height: (i: number) => number): Group[] {
	const groups: Group[] = summits.map((summit, k) => ({
		summits: [summit],
		valleys: [],
		valleyBehind: valleys[k] ?? -1,
		height: summit.height
	}));
	for (;;) {
		let best = -1;
		let bestShare = OWN_FLANK_SHARE;
		for (let k = 0; k + 1 < groups.length; k++) {
			const [lower, higher] = [groups[k].height, groups[k + 1].height].sort((a, b) => a - b);
			const share = height(groups[k].valleyBehind) / lower;
			if (share >= bestShare && lower >= COMPARABLE_SHARE * higher) [best, bestShare] = [k, share];
		}
		if (best < 0) return groups;
		const [a, b] = [groups[best], groups[best + 1]];
		groups.splice(best, 2, {
			summits: [...a.summits, ...b.summits],
			valleys: [...a.valleys, a.valleyBehind, ...b.valleys],
			valleyBehind: b.valleyBehind,
			height: Math.max(a.height, b.height)
		});
	}
}

/** Middle and mean of the stretch over 90 % of a summit's height; its ends lie between entries, where the height is crossed. */
function topOf(
	height: (i: number) => number,
	{ first, last, height: top }: Summit,
	from: number,
	to: number
): { centre: number; topMean: number } {
	const level = TOP_SHARE * top;
	let low = first;
	while (low < last && height(low) < level) low++;
	while (low > from && height(low - 1) >= level) low--;
	let high = last;
	while (high > first && height(high) < level) high--;
	while (high < to && height(high + 1) >= level) high++;
	const lowPart = low > from ? (height(low) - level) / (height(low) - height(low - 1)) : 0;
	const highPart = high < to ? (height(high) - level) / (height(high) - height(high + 1)) : 0;
	let sum = 0;
	for (let i = low; i <= high; i++) sum += height(i);
	return { centre: (low - Math.min(lowPart, 1) + high + Math.min(highPart, 1)) / 2, topMean: sum / (high - low + 1) };
}
